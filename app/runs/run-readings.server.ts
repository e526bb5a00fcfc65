import { and, asc, eq } from 'drizzle-orm'
import { type EdgeSpread, pooledEdgeSpread } from '../analysis/edge-spread.ts'
import type { Database } from '../db/client.server.ts'
import { benchRevisions, imports, people, readings, strikes } from '../db/schema.ts'
import { type ImportedAs, importedAs } from '../imports/imported-bench.ts'
import type { CommissionedBench } from '../protocol/bench-config.ts'
import { findReads, noReads, type Reads } from './reads.server.ts'

type Strike = { reason: string; by: string; at: string }

/** A reading as it is stored, with all that is needed to work it out. */
export type StoredReading = Reads & {
  reading: typeof readings.$inferSelect
  by: string
  /** Null where the run was imported with a field of its own. */
  config: CommissionedBench | null
  imported: ImportedAs | null
  /** Pooled over the readings of the run that are not struck. */
  edgeSpread: EdgeSpread | null
  struck: Strike | null
}

/** The readings of a run by number, each with the bench as it was when the reading was taken. */
export async function loadReadings(db: Database, runId: string): Promise<StoredReading[]> {
  const [rows, readsOf, strikeOf, imported] = await Promise.all([
    db
      .select({ reading: readings, by: people.name, config: benchRevisions.config })
      .from(readings)
      .innerJoin(people, eq(people.id, readings.personId))
      .leftJoin(
        benchRevisions,
        and(eq(benchRevisions.benchId, readings.benchId), eq(benchRevisions.revision, readings.revision)),
      )
      .where(eq(readings.runId, runId))
      .orderBy(asc(readings.number)),
    findReads(db, runId),
    findStrikes(db, runId),
    findImportedAs(db, runId),
  ])
  const standing = rows.filter(({ reading }) => !strikeOf.has(reading.id))
  const edgeSpread = pooledEdgeSpread(
    standing.map(({ reading }) => {
      const { edges, photos } = readsOf.get(reading.id) ?? noReads
      return [...edges, ...photos]
    }),
  )
  return rows.map((row) => ({
    ...row,
    ...(readsOf.get(row.reading.id) ?? noReads),
    imported,
    edgeSpread,
    struck: strikeOf.get(row.reading.id) ?? null,
  }))
}

async function findImportedAs(db: Database, runId: string): Promise<ImportedAs | null> {
  const [row] = await db
    .select({ field: imports.field, mapping: imports.mapping })
    .from(imports)
    .where(eq(imports.runId, runId))
  return row ? importedAs(row) : null
}

async function findStrikes(db: Database, runId: string): Promise<Map<string, Strike>> {
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
