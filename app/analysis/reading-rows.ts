import type { BudgetInput } from '#app/metrology/budget.ts'
import {
  standardUncertaintyFromAccuracy,
  standardUncertaintyFromHalfWidth,
  standardUncertaintyFromResolution,
} from '#app/metrology/instrument-accuracy.ts'
import type { CoilPair } from '#app/physics/coil-field.ts'
import type { EvennessTable, Gun } from './evenness-table.ts'

/** What of a commissioned bench a reading needs. x runs along the scale; both lie in the mid-plane. */
export type ReadingBench = {
  readonly coilPair: CoilPair
  /** standard uncertainties, the same error in both coils */
  readonly uTurns?: number
  readonly uRadiusMetres?: number
  readonly uSeparationMetres?: number
  /** series: the measured current goes through each coil; parallel: half of it does */
  readonly coilConnection: 'series' | 'parallel'
  /** measured centre field an ampere through each coil; it takes the place of the geometry in the budget */
  readonly fieldFactor?: { teslaPerAmp: number; standardUncertainty: number }
  readonly gun: Gun
  readonly scale: {
    kind: 'mirror' | 'ruler-behind'
    graduationMetres: number
    /** part of a graduation that is read, 0.5 for half a division */
    readableFraction: number
    distanceBehindMetres: number
    uDistanceBehindMetres: number
    eyeDistanceMetres: number
  }
  /** half-width of the bounds on the radius within which the edge of the glow was taken */
  readonly beam: { halfWidthMetres: number }
  readonly anodeMeter: {
    percentOfReading: number
    digits: number
    digitSizeVolts: number
    /** added to the reading, from a verification */
    correctionVolts?: number
    uCorrectionVolts?: number
  }
  readonly coilMeter: { percentOfReading: number; digits: number; digitSizeAmps: number }
}

export type Reading = {
  voltageVolts: number
  /** standard error of the window's mean (type A), with its degrees of freedom if known */
  uVoltageVolts: number
  voltageDegreesOfFreedom?: number
  /** as measured, before it divides between coils in parallel; negative when the sense is reversed */
  currentAmps: number
  uCurrentAmps: number
  currentDegreesOfFreedom?: number
  /** one entry a person or repeat */
  leftEdges: readonly number[]
  rightEdges: readonly number[]
}

export const budgetGroups = ['anode voltage', 'coil current', 'edges', 'coil pair', 'beam'] as const
export type BudgetGroup = (typeof budgetGroups)[number]

export type Row = Omit<BudgetInput, 'value'> & { group: BudgetGroup; sensitivity: number }

/** Mean and spread of what several people read for one edge. */
export type Edge = { count: number; mean: number; standardError: number }

export function voltageRows({ bench, ...reading }: Reading & { bench: ReadingBench }, sensitivity: number) {
  const { percentOfReading, digits, digitSizeVolts: digitSize, uCorrectionVolts = 0 } = bench.anodeMeter
  const accuracy = { reading: reading.voltageVolts, percentOfReading, digits, digitSize }
  const row = { group: 'anode voltage', sensitivity } as const
  return {
    anodeVoltage: {
      ...row,
      standardUncertainty: reading.uVoltageVolts,
      ...freedom(reading.voltageDegreesOfFreedom),
    },
    anodeResolution: { ...row, standardUncertainty: standardUncertaintyFromResolution(digitSize) },
    anodeMeter: { ...row, standardUncertainty: standardUncertaintyFromAccuracy(accuracy), common: true },
    ...(uCorrectionVolts === 0
      ? {}
      : { anodeCorrection: { ...row, standardUncertainty: uCorrectionVolts, common: true } }),
  }
}

export function currentRows({ bench, ...reading }: Reading & { bench: ReadingBench }, sensitivity: number) {
  const { percentOfReading, digits, digitSizeAmps: digitSize } = bench.coilMeter
  const accuracy = { reading: reading.currentAmps, percentOfReading, digits, digitSize }
  const row = { group: 'coil current', sensitivity } as const
  return {
    coilCurrent: {
      ...row,
      standardUncertainty: reading.uCurrentAmps,
      ...freedom(reading.currentDegreesOfFreedom),
    },
    coilResolution: { ...row, standardUncertainty: standardUncertaintyFromResolution(digitSize) },
    coilMeter: { ...row, standardUncertainty: standardUncertaintyFromAccuracy(accuracy), common: true },
  }
}

export function edgeRows(
  scale: ReadingBench['scale'],
  left: Edge,
  right: Edge,
  perEdge: number,
): Record<string, Row> {
  const resolution = standardUncertaintyFromResolution(scale.graduationMetres * scale.readableFraction)
  const rows: Record<string, Row> = {}
  for (const [name, { count, standardError }, sensitivity] of [
    ['leftEdge', left, -perEdge],
    ['rightEdge', right, perEdge],
  ] as const) {
    rows[`${name}Resolution`] = { group: 'edges', sensitivity, standardUncertainty: resolution }
    if (count > 1) {
      rows[`${name}Spread`] = {
        group: 'edges',
        sensitivity,
        standardUncertainty: standardError,
        degreesOfFreedom: count - 1,
      }
    }
  }
  if (scale.kind === 'ruler-behind') {
    // d = (right − left)(L − δ)/L, and perEdge already holds the factor (L − δ)/L.
    const rest = scale.eyeDistanceMetres - scale.distanceBehindMetres
    rows.scaleDistance = {
      group: 'edges',
      sensitivity: (-perEdge * (right.mean - left.mean)) / rest,
      standardUncertainty: scale.uDistanceBehindMetres,
      common: true,
    }
  }
  return rows
}

/** `perFactor` is ∂(e/m)/∂(k·g): k and g enter only as their product. */
export function pairRows(
  bench: ReadingBench,
  table: EvennessTable,
  radius: number,
  perFactor: number,
): Record<string, Row> {
  const g = table.g.value(radius)
  const row = { group: 'coil pair', common: true } as const
  if (bench.fieldFactor) {
    const { standardUncertainty } = bench.fieldFactor
    return { fieldFactor: { ...row, sensitivity: perFactor * g, standardUncertainty } }
  }
  const { slopes, teslaPerAmp: k } = table
  const perRadius = slopes.perRadiusMetre * g + k * table.gPerRadiusMetre.value(radius)
  const perSeparation = slopes.perSeparationMetre * g + k * table.gPerSeparationMetre.value(radius)
  return {
    coilTurns: {
      ...row,
      sensitivity: perFactor * slopes.perTurn * g,
      standardUncertainty: bench.uTurns ?? 0,
    },
    coilRadius: { ...row, sensitivity: perFactor * perRadius, standardUncertainty: bench.uRadiusMetres ?? 0 },
    coilSeparation: {
      ...row,
      sensitivity: perFactor * perSeparation,
      standardUncertainty: bench.uSeparationMetres ?? 0,
    },
  }
}

export function beamRow(bench: ReadingBench, sensitivity: number): Row {
  const standardUncertainty = standardUncertaintyFromHalfWidth(bench.beam.halfWidthMetres)
  return { group: 'beam', sensitivity, standardUncertainty, common: true }
}

function freedom(degreesOfFreedom: number | undefined) {
  return degreesOfFreedom === undefined ? {} : { degreesOfFreedom }
}
