import { and, eq, inArray } from 'drizzle-orm'
import { type Database, write } from '../db/client.server.ts'
import { acknowledgements } from '../db/schema.ts'
import { cautionsVersion, termOf } from './cautions.ts'

const inForce = (now: Date) =>
  and(eq(acknowledgements.term, termOf(now)), eq(acknowledgements.cautionsVersion, cautionsVersion))

/** Notes that a person has acknowledged the cautions in their present wording for this term. A second time changes nothing. */
export async function acknowledgeCautions(
  db: Database,
  { personId, now = new Date() }: { personId: string; now?: Date },
): Promise<void> {
  await write(db, (tx) =>
    tx
      .insert(acknowledgements)
      .values({ personId, term: termOf(now), cautionsVersion, acknowledgedAt: now })
      .onConflictDoNothing(),
  )
}

/** Those of the given people who have acknowledged the present cautions for this term. */
export async function findAcknowledged(
  db: Database,
  { personIds, now = new Date() }: { personIds: string[]; now?: Date },
): Promise<Set<string>> {
  const rows = await db
    .select({ personId: acknowledgements.personId })
    .from(acknowledgements)
    .where(and(inForce(now), inArray(acknowledgements.personId, personIds)))
  return new Set(rows.map(({ personId }) => personId))
}

export async function hasAcknowledged(db: Database, personId: string, now = new Date()): Promise<boolean> {
  return (await findAcknowledged(db, { personIds: [personId], now })).has(personId)
}
