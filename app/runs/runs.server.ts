import { and, desc, eq, isNull } from 'drizzle-orm'
import { type Database, type Transaction, write } from '../db/client.server.ts'
import { people, runs } from '../db/schema.ts'

export type Run = { id: string; startedAt: Date; by: string }

/** The open run of a bench, or null. */
export async function findOpenRun(db: Database | Transaction, benchId: string): Promise<Run | null> {
  const [run] = await db
    .select({ id: runs.id, startedAt: runs.startedAt, by: people.name })
    .from(runs)
    .innerJoin(people, eq(people.id, runs.personId))
    .where(and(eq(runs.benchId, benchId), isNull(runs.endedAt)))
    .orderBy(desc(runs.startedAt))
    .limit(1)
  return run ?? null
}

async function begin(
  tx: Transaction,
  { benchId, personId, now }: { benchId: string; personId: string; now: Date },
) {
  await tx
    .update(runs)
    .set({ endedAt: now })
    .where(and(eq(runs.benchId, benchId), isNull(runs.endedAt)))
  const [run] = await tx.insert(runs).values({ benchId, personId, startedAt: now }).returning({ id: runs.id })
  if (!run) throw new Error('The run was not stored')
  return run.id
}

/** Closes the open run of a bench, if there is one, and begins a new one. Its readings are numbered from 1. */
export function startRun(
  db: Database,
  request: { benchId: string; personId: string; now?: Date },
): Promise<string> {
  return write(db, (tx) => begin(tx, { now: new Date(), ...request }))
}

/** The open run of a bench when it was begun on this calendar day (of this machine's time zone), or null. */
export async function findRunOfToday(
  db: Database | Transaction,
  { benchId, now }: { benchId: string; now: Date },
): Promise<string | null> {
  const open = await findOpenRun(db, benchId)
  return open && open.startedAt.toDateString() === now.toDateString() ? open.id : null
}

/**
 * The run that a reading of now belongs to: that of today, else a new one, with the older one closed. So a run never holds
 * readings of two lab days.
 */
export async function runOfToday(
  tx: Transaction,
  { benchId, personId, now }: { benchId: string; personId: string; now: Date },
): Promise<string> {
  return (await findRunOfToday(tx, { benchId, now })) ?? (await begin(tx, { benchId, personId, now }))
}
