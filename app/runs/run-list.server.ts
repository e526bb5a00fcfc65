import { count, countDistinct, desc, eq, sql } from 'drizzle-orm'
import type { Watcher } from '../benches/visible-benches.server.ts'
import type { Database } from '../db/client.server.ts'
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
  statedDiameters,
  strikes,
} from '../db/schema.ts'
import { visibleRuns } from './visible-run.server.ts'

export type RunRow = {
  id: string
  by: string
  isMine: boolean
  startedAt: string
  bench: { id: string; name: string } | null
  /** The file that it was imported from. */
  fileName: string | null
  readings: number
  struck: number
  /** Of those not struck, how many have a diameter, and so can have e/m. */
  withDiameter: number
}

const hasDiameter = sql`(
  exists (select 1 from ${edges} where ${edges.readingId} = ${readings.id})
  or exists (select 1 from ${rungs} where ${rungs.readingId} = ${readings.id})
  or exists (select 1 from ${statedDiameters} where ${statedDiameters.readingId} = ${readings.id})
  or exists (select 1 from ${photoMeasurements} join ${photos} on ${photos.id} = ${photoMeasurements.photoId}
    where ${photos.readingId} = ${readings.id}))`

/** The runs with readings that a person may read, the newest first: all for staff, else those that they took part in. */
export async function listRuns(
  db: Database,
  { person, limit, offset = 0 }: { person: Watcher; limit: number; offset?: number },
): Promise<RunRow[]> {
  const rows = await db
    .select({
      id: runs.id,
      by: people.name,
      personId: runs.personId,
      startedAt: runs.startedAt,
      bench: { id: benches.id, name: benches.name },
      fileName: imports.fileName,
      readings: count(readings.id),
      struck: count(strikes.readingId),
      withDiameter: countDistinct(
        sql`case when ${strikes.readingId} is null and ${hasDiameter} then ${readings.id} end`,
      ),
    })
    .from(runs)
    .innerJoin(people, eq(people.id, runs.personId))
    .innerJoin(readings, eq(readings.runId, runs.id))
    .leftJoin(strikes, eq(strikes.readingId, readings.id))
    .leftJoin(benches, eq(benches.id, runs.benchId))
    .leftJoin(imports, eq(imports.runId, runs.id))
    .where(visibleRuns(db, person))
    .groupBy(runs.id)
    .orderBy(desc(runs.startedAt), desc(runs.id))
    .limit(limit)
    .offset(offset)
  return rows.map(({ personId, startedAt, ...row }) => ({
    ...row,
    isMine: personId === person.id,
    startedAt: startedAt.toISOString(),
  }))
}
