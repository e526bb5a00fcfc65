import type { Database } from '../db/client.server.ts'
import type { TypedBench } from '../protocol/bench-config.ts'
import { hasAcknowledged } from './acknowledgements.server.ts'
import { type Answered, ownCodes, refused } from './action-reply.ts'
import { requireVisibleBench, type Watcher } from './visible-benches.server.ts'

const refuse = (code: string, sentence: string): { answered: Answered } => ({
  answered: { status: 409, reply: refused({ code, sentence }) },
})

/**
 * A bench without ports for someone who wants to tick or to type there and has acknowledged the cautions; else the answer
 * that says why not. Throws a 404 for a bench this person may not watch.
 */
export async function findTypedBench(
  db: Database,
  { benchId, person, now }: { benchId: string; person: Watcher; now: Date },
): Promise<{ bench: TypedBench } | { answered: Answered }> {
  const { config } = await requireVisibleBench(db, { benchId, person })
  if (config.instruments !== null)
    return refuse(
      ownCodes.hasInstruments,
      'This bench has instruments: the bridge watches its chain and captures its readings. Nothing is typed here.',
    )
  if (!(await hasAcknowledged(db, person.id, now)))
    return refuse(
      ownCodes.cautionsOpen,
      'Acknowledge the cautions first: this bench is for people who know what can hurt at it.',
    )
  return { bench: config }
}
