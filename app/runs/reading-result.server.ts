import { type EdgeSpread, type ReadingBench, readingBudget } from '../analysis/reading.ts'
import { readingBench } from '../benches/reading-bench.ts'
import type { readings } from '../db/schema.ts'
import type { BenchConfig } from '../protocol/bench-config.ts'
import type { ReadingView } from './reading-view.server.ts'

const benches = new Map<string, ReadingBench>()

/** One object a revision, so that its field is tabulated once in the life of the process. */
function benchOf(config: BenchConfig): ReadingBench {
  const key = JSON.stringify(config)
  const bench = benches.get(key) ?? readingBench(config)
  benches.set(key, bench)
  return bench
}

/**
 * e/m of one reading with its budget, under the revision that it was taken with. Null without edges, and where voltage,
 * current and edges belong to no orbit of this bench.
 */
export function workOut(
  reading: typeof readings.$inferSelect,
  {
    config,
    edges,
    edgeSpread,
  }: { config: BenchConfig; edges: ReadingView['edges']; edgeSpread: EdgeSpread | null },
): ReadingView['result'] {
  if (edges.length === 0) return null
  try {
    const budget = readingBudget({
      bench: benchOf(config),
      voltageVolts: reading.anodeVolts,
      uVoltageVolts: reading.uAnodeVolts,
      voltageDegreesOfFreedom: Math.max(1, reading.anodeEffectiveCount - 1),
      // Whether the meter stands before or behind the reversing relay, the polarity tells the sense.
      currentAmps: Math.abs(reading.coilAmps) * (reading.polarity === -1 ? -1 : 1),
      uCurrentAmps: reading.uCoilAmps,
      currentDegreesOfFreedom: Math.max(1, reading.coilEffectiveCount - 1),
      leftEdges: edges.map(({ leftMetres }) => leftMetres),
      rightEdges: edges.map(({ rightMetres }) => rightMetres),
      edgeSpread,
    })
    return {
      chargeToMass: budget.value,
      standardUncertainty: budget.standardUncertainty,
      expandedUncertainty: budget.expandedUncertainty,
      coverageFactor: budget.coverageFactor,
      diameterMetres: budget.diameterMetres,
      groups: budget.groups,
    }
  } catch (error) {
    if (error instanceof RangeError) return null
    throw error
  }
}
