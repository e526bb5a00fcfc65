import { desc, eq, sql } from 'drizzle-orm'
import * as z from 'zod'
import { type Answered, done, fieldErrors } from '../benches/action-reply.ts'
import type { Watcher } from '../benches/visible-benches.server.ts'
import { type Database, write } from '../db/client.server.ts'
import { statements } from '../db/schema.ts'
import { type Fit, fits, fitWords } from './fits.ts'
import { requireVisibleRun } from './visible-run.server.ts'

/** The fit whose value a run states: the newest choice, the general model's where nobody chose. */
export async function findStatedFit(db: Database, runId: string): Promise<Fit> {
  const [newest] = await db
    .select({ fit: statements.fit })
    .from(statements)
    .where(eq(statements.runId, runId))
    .orderBy(desc(statements.statedAt), desc(sql`${statements}.rowid`))
    .limit(1)
  const parsed = z.enum(fits).safeParse(newest?.fit)
  return parsed.success ? parsed.data : 'general'
}

/** States the result of a run by one of the fits. Throws a 404 for a run that this person may not read. */
export async function stateFit(
  db: Database,
  { runId, person, form }: { runId: string; person: Watcher; form: FormData },
): Promise<Answered> {
  await requireVisibleRun(db, { runId, person })
  const parsed = z.enum(fits).safeParse(form.get('fit'))
  if (!parsed.success) return { status: 400, reply: fieldErrors({ fit: ['Choose one of the fits.'] }) }
  await write(db, (tx) => tx.insert(statements).values({ runId, personId: person.id, fit: parsed.data }))
  return { status: 200, reply: done(`The result is now stated by ${fitWords[parsed.data]}.`) }
}
