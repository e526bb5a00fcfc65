import { and, asc, eq } from 'drizzle-orm'
import { type Answered, done, fieldErrors } from '../benches/action-reply.ts'
import { findTypedBench } from '../benches/typed-bench.server.ts'
import type { Watcher } from '../benches/visible-benches.server.ts'
import { type Database, type Transaction, write } from '../db/client.server.ts'
import { checklists, people } from '../db/schema.ts'
import { runOfToday } from './runs.server.ts'

export type Ticked = { personId: string; name: string; at: string }

/** Who has ticked the checklist for a run as it stands in a revision of the bench, in the order in which they did. */
export async function findTicked(
  db: Database | Transaction,
  { runId, revision }: { runId: string; revision: number },
): Promise<Ticked[]> {
  const rows = await db
    .select({ personId: checklists.personId, name: people.name, tickedAt: checklists.tickedAt })
    .from(checklists)
    .innerJoin(people, eq(people.id, checklists.personId))
    .where(and(eq(checklists.runId, runId), eq(checklists.revision, revision)))
    .orderBy(asc(checklists.tickedAt))
  return rows.map(({ personId, name, tickedAt }) => ({ personId, name, at: tickedAt.toISOString() }))
}

/**
 * Notes that a person has looked at every contact of a bench without ports, in the words that they have now. The first of
 * the day begins the run. Throws a 404 for a bench this person may not watch.
 */
export async function tickChecklist(
  db: Database,
  {
    benchId,
    person,
    form,
    now = new Date(),
  }: { benchId: string; person: Watcher; form: FormData; now?: Date },
): Promise<Answered> {
  const found = await findTypedBench(db, { benchId, person, now })
  if ('answered' in found) return found.answered
  const { revision, checklist: contacts } = found.bench
  const ticked = form.getAll('contact')
  const open = contacts.filter(({ contact }) => !ticked.includes(contact)).map(({ contact }) => contact)
  if (open.length > 0)
    return { status: 400, reply: fieldErrors({ contact: [`Not ticked: ${open.join(', ')}.`] }) }
  await write(db, async (tx) => {
    const runId = await runOfToday(tx, { benchId, personId: person.id, now })
    await tx.insert(checklists).values({ runId, personId: person.id, revision, contacts, tickedAt: now })
  })
  return { status: 200, reply: done('The checklist is noted with your name and the time.') }
}
