import type { BudgetBench, FieldFactor } from '#app/analysis/reading.ts'
import { readingBench } from '../benches/reading-bench.ts'
import type { CommissionedBench } from '../protocol/bench-config.ts'
import type { ImportMapping } from './mapping.ts'

/** What a run was imported with, as far as its readings are worked out with it. */
export type ImportedAs = {
  field: FieldFactor | null
  statesVoltage: boolean
  statesCurrent: boolean
  isOnScale: boolean
}

export function importedAs({
  field,
  mapping: { columns, forAll, isOnScale },
}: {
  field: FieldFactor | null
  mapping: Pick<ImportMapping, 'columns' | 'forAll' | 'isOnScale'>
}): ImportedAs {
  const states = (role: 'uVoltage' | 'uCurrent', all: string) =>
    all.trim() !== '' || columns.some((column) => column.role === role)
  return {
    field,
    statesVoltage: states('uVoltage', forAll.voltage),
    statesCurrent: states('uCurrent', forAll.current),
    isOnScale,
  }
}

const exactMeter = { percentOfReading: 0, digits: 0 }

/**
 * The bench of imported readings: that of ours whose data they use, or a field factor of their own. A stated uncertainty is
 * all of it, so that the accuracy of a meter of ours counts only where none is stated.
 *
 * @throws RangeError where there is neither a bench nor a field
 */
export function importedBench(
  config: CommissionedBench | null,
  { field, statesVoltage, statesCurrent, isOnScale }: ImportedAs,
): BudgetBench {
  const meters = {
    ...(statesVoltage && { anodeMeter: { ...exactMeter, digitSizeVolts: 0 } }),
    ...(statesCurrent && { coilMeter: { ...exactMeter, digitSizeAmps: 0 } }),
  }
  if (config) {
    const bench = readingBench(config)
    // Without a scale between them the diameter is the beam's own.
    return { ...bench, ...meters, scale: isOnScale ? bench.scale : { kind: 'rungs' } }
  }
  if (!field) throw new RangeError('field must be given where there is no bench')
  return {
    coilPair: null,
    fieldFactor: field,
    coilConnection: 'series',
    scale: { kind: 'rungs' },
    beam: { halfWidthMetres: 0 },
    anodeMeter: { ...exactMeter, digitSizeVolts: 0 },
    coilMeter: { ...exactMeter, digitSizeAmps: 0 },
  }
}
