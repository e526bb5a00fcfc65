import { and, asc, eq } from 'drizzle-orm'
import { pooledEdgeSpread } from '../analysis/edge-spread.ts'
import type { Database } from '../db/client.server.ts'
import { benchRevisions, people, readings, strikes } from '../db/schema.ts'
import {
  standardUncertaintyFromAccuracy,
  standardUncertaintyFromResolution,
} from '../metrology/instrument-accuracy.ts'
import type { BenchConfig } from '../protocol/bench-config.ts'
import { workOut } from './reading-result.server.ts'
import { findReads, noReads, type Reads } from './reads.server.ts'

export type ReadingView = {
  id: string
  number: number
  capturedAt: string
  by: string
  revision: number
  polarity: 1 | -1
  anodeVolts: number
  /** Standard uncertainty of this value: scatter, resolution and accuracy of the meter together. */
  uAnodeVolts: number
  coilAmps: number
  uCoilAmps: number
  anodeStandardErrorVolts: number
  coilStandardErrorAmps: number
  /** The edges of those whose newest they are, in the order in which they came; the others measured off a photo last. */
  edges: Reads['edges']
  photos: Reads['photos']
  /** Null until someone has entered edges or measured a photo, and where the numbers give no orbit. */
  result: {
    chargeToMass: number
    standardUncertainty: number
    expandedUncertainty: number
    coverageFactor: number
    diameterMetres: number
    groups: { name: string; share: number }[]
  } | null
  struck: { reason: string; by: string; at: string } | null
}

type Accuracy = BenchConfig['instruments']['anodeMeter']['accuracy']

/** Scatter of the window, the meter's accuracy and the size of its last digit, as one standard uncertainty. */
function combined(reading: number, standardError: number, accuracy: Accuracy): number {
  return Math.hypot(
    standardError,
    standardUncertaintyFromAccuracy({ reading, ...accuracy }),
    standardUncertaintyFromResolution(accuracy.digitSize),
  )
}

/** The readings of a run by number, each worked out with the bench as it was when the reading was taken. */
export async function listReadings(db: Database, { runId }: { runId: string }): Promise<ReadingView[]> {
  const [rows, readsOf, strikeOf] = await Promise.all([
    db
      .select({ reading: readings, by: people.name, config: benchRevisions.config })
      .from(readings)
      .innerJoin(people, eq(people.id, readings.personId))
      .innerJoin(
        benchRevisions,
        and(eq(benchRevisions.benchId, readings.benchId), eq(benchRevisions.revision, readings.revision)),
      )
      .where(eq(readings.runId, runId))
      .orderBy(asc(readings.number)),
    findReads(db, runId),
    findStrikes(db, runId),
  ])
  const standing = rows.filter(({ reading }) => !strikeOf.has(reading.id))
  const edgeSpread = pooledEdgeSpread(
    standing.map(({ reading }) => {
      const { edges, photos } = readsOf.get(reading.id) ?? noReads
      return [...edges, ...photos]
    }),
  )
  return rows.map(({ reading, by, config }) => {
    const reads = readsOf.get(reading.id) ?? noReads
    const { anodeMeter, coilMeter } = config.instruments
    return {
      id: reading.id,
      number: reading.number,
      capturedAt: reading.capturedAt.toISOString(),
      by,
      revision: reading.revision,
      polarity: reading.polarity === -1 ? -1 : 1,
      anodeVolts: reading.anodeVolts,
      uAnodeVolts: combined(reading.anodeVolts, reading.uAnodeVolts, anodeMeter.accuracy),
      coilAmps: reading.coilAmps,
      uCoilAmps: combined(reading.coilAmps, reading.uCoilAmps, coilMeter.accuracy),
      anodeStandardErrorVolts: reading.uAnodeVolts,
      coilStandardErrorAmps: reading.uCoilAmps,
      ...reads,
      result: workOut(reading, { config, ...reads, edgeSpread }),
      struck: strikeOf.get(reading.id) ?? null,
    }
  })
}

async function findStrikes(
  db: Database,
  runId: string,
): Promise<Map<string, NonNullable<ReadingView['struck']>>> {
  const rows = await db
    .select({
      readingId: strikes.readingId,
      reason: strikes.reason,
      by: people.name,
      struckAt: strikes.struckAt,
    })
    .from(strikes)
    .innerJoin(readings, eq(readings.id, strikes.readingId))
    .innerJoin(people, eq(people.id, strikes.personId))
    .where(eq(readings.runId, runId))
  return new Map(
    rows.map(({ readingId, reason, by, struckAt }) => [
      readingId,
      { reason, by, at: struckAt.toISOString() },
    ]),
  )
}
