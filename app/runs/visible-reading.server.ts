import { and, eq, ne } from 'drizzle-orm'
import { data } from 'react-router'
import { visibleTo, type Watcher } from '../benches/visible-benches.server.ts'
import type { Database, Transaction } from '../db/client.server.ts'
import { benches, benchRevisions, readings, strikes } from '../db/schema.ts'
import type { CommissionedBench } from '../protocol/bench-config.ts'

/**
 * A reading taken at a bench that this person may watch, with the bench as it was when the reading was taken.
 * Throws a 404 when there is none.
 */
export async function requireVisibleReading(
  db: Database | Transaction,
  { benchId, readingId, person }: { benchId: string; readingId: string; person: Watcher },
): Promise<{
  id: string
  runId: string
  number: number
  personId: string
  config: CommissionedBench
  isStruck: boolean
}> {
  const [reading] = await db
    .select({
      id: readings.id,
      runId: readings.runId,
      number: readings.number,
      personId: readings.personId,
      config: benchRevisions.config,
      struckAt: strikes.struckAt,
    })
    .from(readings)
    .innerJoin(benches, eq(benches.id, readings.benchId))
    .innerJoin(
      benchRevisions,
      and(eq(benchRevisions.benchId, readings.benchId), eq(benchRevisions.revision, readings.revision)),
    )
    .leftJoin(strikes, eq(strikes.readingId, readings.id))
    .where(
      and(
        eq(readings.id, readingId),
        eq(readings.benchId, benchId),
        ne(readings.source, 'imported'),
        visibleTo(db, person),
      ),
    )
  if (!reading) throw data('There is no such reading, or it is not on one of your benches.', { status: 404 })
  const { struckAt, ...rest } = reading
  return { ...rest, isStruck: struckAt !== null }
}
