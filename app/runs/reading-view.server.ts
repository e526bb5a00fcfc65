import { and, asc, eq, sql } from 'drizzle-orm'
import { pooledEdgeSpread } from '../analysis/edge-spread.ts'
import type { Database } from '../db/client.server.ts'
import { benchRevisions, edges, people, readings, strikes } from '../db/schema.ts'
import {
  standardUncertaintyFromAccuracy,
  standardUncertaintyFromResolution,
} from '../metrology/instrument-accuracy.ts'
import type { BenchConfig } from '../protocol/bench-config.ts'
import { workOut } from './reading-result.server.ts'

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
  /** The newest edges of each person, in the order in which they came. */
  edges: { personId: string; name: string; leftMetres: number; rightMetres: number }[]
  /** Null until someone has entered edges, and where the numbers give no orbit. */
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
  const [rows, edgesOf, strikeOf] = await Promise.all([
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
    findEdges(db, runId),
    findStrikes(db, runId),
  ])
  const standing = rows.filter(({ reading }) => !strikeOf.has(reading.id))
  const edgeSpread = pooledEdgeSpread(standing.map(({ reading }) => edgesOf.get(reading.id) ?? []))
  return rows.map(({ reading, by, config }) => {
    const newest = edgesOf.get(reading.id) ?? []
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
      edges: newest,
      result: workOut(reading, { config, edges: newest, edgeSpread }),
      struck: strikeOf.get(reading.id) ?? null,
    }
  })
}

/** The newest edges of each person, by reading, in the order in which they came. */
async function findEdges(db: Database, runId: string): Promise<Map<string, ReadingView['edges']>> {
  const rows = await db
    .select({
      readingId: edges.readingId,
      personId: edges.personId,
      name: people.name,
      leftMetres: edges.leftMetres,
      rightMetres: edges.rightMetres,
    })
    .from(edges)
    .innerJoin(readings, eq(readings.id, edges.readingId))
    .innerJoin(people, eq(people.id, edges.personId))
    .where(eq(readings.runId, runId))
    .orderBy(asc(edges.enteredAt), sql`${edges}.rowid`)
  const byReading = new Map<string, Map<string, ReadingView['edges'][number]>>()
  for (const { readingId, ...entry } of rows) {
    const byPerson = byReading.get(readingId) ?? new Map()
    byPerson.delete(entry.personId)
    byReading.set(readingId, byPerson.set(entry.personId, entry))
  }
  return new Map([...byReading].map(([readingId, byPerson]) => [readingId, [...byPerson.values()]]))
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
