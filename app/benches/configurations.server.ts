import { asc, sql } from 'drizzle-orm'
import type { Database } from '../db/client.server.ts'
import { benchRevisions } from '../db/schema.ts'
import type { BenchConfig } from '../protocol/bench-config.ts'

/** Every commissioned bench with ports as the bridge has to know it: the newest revision of each. */
export async function listConfigurations(db: Database): Promise<BenchConfig[]> {
  const rows = await db
    .select({ config: benchRevisions.config })
    .from(benchRevisions)
    .where(
      sql`${benchRevisions.revision} = (select max(newest.revision) from bench_revisions newest where newest.bench_id = ${benchRevisions.benchId})`,
    )
    .orderBy(asc(benchRevisions.benchId))
  return rows.flatMap(({ config }) => (config.instruments === null ? [] : [config]))
}
