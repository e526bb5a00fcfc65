import { and, eq, exists, isNull, or, type SQL, sql } from 'drizzle-orm'
import { data } from 'react-router'
import { may } from '../auth/capabilities.ts'
import { visibleTo, type Watcher } from '../benches/visible-benches.server.ts'
import type { Database, Transaction } from '../db/client.server.ts'
import {
  benches,
  edges,
  imports,
  people,
  photoMeasurements,
  photos,
  readings,
  rungs,
  runs,
} from '../db/schema.ts'

export type VisibleRun = {
  id: string
  startedAt: Date
  personId: string
  by: string
  /** Null where it was imported with a field of its own. */
  bench: { id: string; name: string; place: string } | null
  /** The file that it was imported from. */
  fileName: string | null
}

/** The condition on `runs` that leaves the ones that a person may read: all for staff, else those that they took part in. */
export function runsOf(db: Database | Transaction, person: Watcher): SQL | undefined {
  if (may(person.role, 'read-runs')) return undefined
  const one = { one: sql`1` }
  return or(
    eq(runs.personId, person.id),
    exists(
      db
        .select(one)
        .from(readings)
        .where(and(eq(readings.runId, runs.id), eq(readings.personId, person.id))),
    ),
    exists(
      db
        .select(one)
        .from(edges)
        .innerJoin(readings, eq(readings.id, edges.readingId))
        .where(and(eq(readings.runId, runs.id), eq(edges.personId, person.id))),
    ),
    exists(
      db
        .select(one)
        .from(rungs)
        .innerJoin(readings, eq(readings.id, rungs.readingId))
        .where(and(eq(readings.runId, runs.id), eq(rungs.personId, person.id))),
    ),
    exists(
      db
        .select(one)
        .from(photoMeasurements)
        .innerJoin(photos, eq(photos.id, photoMeasurements.photoId))
        .innerJoin(readings, eq(readings.id, photos.readingId))
        .where(and(eq(readings.runId, runs.id), eq(photoMeasurements.personId, person.id))),
    ),
  )
}

/** The condition on `runs` and `benches` beside it: theirs to read, on a bench that they may watch, if on any. */
export function visibleRuns(db: Database | Transaction, person: Watcher): SQL | undefined {
  const onTheirs = visibleTo(db, person)
  return and(runsOf(db, person), onTheirs && or(isNull(runs.benchId), onTheirs))
}

/** A run that this person may read. Throws a 404 when there is none. */
export async function requireVisibleRun(
  db: Database | Transaction,
  { runId, person }: { runId: string; person: Watcher },
): Promise<VisibleRun> {
  const [run] = await db
    .select({
      id: runs.id,
      startedAt: runs.startedAt,
      personId: runs.personId,
      by: people.name,
      bench: { id: benches.id, name: benches.name, place: benches.place },
      fileName: imports.fileName,
    })
    .from(runs)
    .innerJoin(people, eq(people.id, runs.personId))
    .leftJoin(benches, eq(benches.id, runs.benchId))
    .leftJoin(imports, eq(imports.runId, runs.id))
    .where(and(eq(runs.id, runId), visibleRuns(db, person)))
  if (!run) throw data('There is no such run, or it is not one of yours.', { status: 404 })
  return run
}
