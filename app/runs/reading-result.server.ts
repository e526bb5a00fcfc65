import {
  type BudgetBench,
  type GivenDiameter,
  type Reading,
  type ReadingResult,
  readingBudget,
} from '../analysis/reading.ts'
import { readingBench } from '../benches/reading-bench.ts'
import { findRung } from '../benches/scale.ts'
import type { readings } from '../db/schema.ts'
import { importedBench } from '../imports/imported-bench.ts'
import type { ReadingView } from './reading-view.server.ts'
import type { Reads } from './reads.server.ts'
import type { StoredReading } from './run-readings.server.ts'

const benches = new Map<string, BudgetBench>()
/** Fields of imports are many, and soon made again. */
const mostBenches = 100

type Entries = Reads & Pick<StoredReading, 'config' | 'imported' | 'edgeSpread'>

/** One object a revision, and a way of importing, so that its field is tabulated once in the life of the process. */
function benchOf({ config, imported }: Entries): BudgetBench {
  const key = JSON.stringify([config, imported])
  const bench = benches.get(key) ?? makeBench(config, imported)
  if (benches.size >= mostBenches) benches.clear()
  benches.set(key, bench)
  return bench
}

function makeBench(config: Entries['config'], imported: Entries['imported']): BudgetBench {
  if (imported) return importedBench(config, imported)
  if (!config) throw new Error('A reading without a bench was not imported')
  return readingBench(config)
}

/**
 * One reading as `readingBudget` takes it and what that gives, under the revision that it was taken with. Null where
 * nobody has read the beam, and where voltage, current and diameter belong to no orbit of this bench.
 */
export function budgetOf(
  stored: typeof readings.$inferSelect,
  entries: Entries,
): { reading: Reading & { bench: BudgetBench }; result: ReadingResult } | null {
  const { edges, photos, edgeSpread } = entries
  const given = givenOf(entries)
  if (edges.length + photos.length === 0 && !given) return null
  const { anodeDigitVolts, coilDigitAmps } = stored
  const isWindow = stored.source === 'measured'
  const reading = {
    bench: benchOf(entries),
    voltageVolts: stored.anodeVolts,
    uVoltageVolts: stored.uAnodeVolts,
    ...(isWindow && { voltageDegreesOfFreedom: Math.max(1, stored.anodeEffectiveCount - 1) }),
    ...(anodeDigitVolts !== null && { voltageDigitVolts: anodeDigitVolts }),
    // Whether the meter stands before or behind the reversing relay, the polarity tells the sense.
    currentAmps: Math.abs(stored.coilAmps) * (stored.polarity === -1 ? -1 : 1),
    uCurrentAmps: stored.uCoilAmps,
    ...(isWindow && { currentDegreesOfFreedom: Math.max(1, stored.coilEffectiveCount - 1) }),
    ...(coilDigitAmps !== null && { currentDigitAmps: coilDigitAmps }),
    leftEdges: edges.map(({ leftMetres }) => leftMetres),
    rightEdges: edges.map(({ rightMetres }) => rightMetres),
    photos,
    given,
    edgeSpread,
  }
  try {
    return { reading, result: readingBudget(reading) }
  } catch (error) {
    if (error instanceof RangeError) return null
    throw error
  }
}

function givenOf({ config, rung, stated }: Entries): GivenDiameter | undefined {
  if (stated) {
    const { diameterMetres, uDiameterMetres } = stated
    return { source: 'stated', diameterMetres, uDiameterMetres }
  }
  const found = rung && config && findRung(config, rung.rung)
  if (!found) return undefined
  return {
    source: 'rung',
    diameterMetres: found.distanceMetres,
    uDiameterMetres: found.uDistanceMetres,
    settingHalfWidthAmps: rung.settingHalfWidthAmps ?? 0,
  }
}

/** e/m of one reading as its logbook shows it, or null. */
export function workOut(stored: typeof readings.$inferSelect, entries: Entries): ReadingView['result'] {
  const budget = budgetOf(stored, entries)?.result
  if (!budget) return null
  return {
    chargeToMass: budget.value,
    standardUncertainty: budget.standardUncertainty,
    expandedUncertainty: budget.expandedUncertainty,
    coverageFactor: budget.coverageFactor,
    diameterMetres: budget.diameterMetres,
    groups: budget.groups,
  }
}
