import { eq, max } from 'drizzle-orm'
import * as z from 'zod'
import { type Answered, done, fieldErrors, ownCodes, refused } from '../benches/action-reply.ts'
import { nextWords } from '../benches/scale.ts'
import { findTypedBench } from '../benches/typed-bench.server.ts'
import type { Watcher } from '../benches/visible-benches.server.ts'
import { type Database, type Transaction, write } from '../db/client.server.ts'
import { readings } from '../db/schema.ts'
import { findTicked } from './checklist.server.ts'
import { typedReadingFormSchema } from './forms.ts'
import { findRunOfToday } from './runs.server.ts'

/**
 * Stores what the meters of a bench without ports show as the next reading of its run, with the last digit of each. Needs
 * the cautions acknowledged, and the checklist ticked by this person for the run of today as the bench now has it. Throws
 * a 404 for a bench this person may not watch.
 */
export async function typeReading(
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
  const { revision } = found.bench
  const parsed = typedReadingFormSchema(found.bench).safeParse(Object.fromEntries(form))
  if (!parsed.success) return { status: 400, reply: fieldErrors(z.flattenError(parsed.error).fieldErrors) }
  const { volts, amps, polarity } = parsed.data
  const number = await write(db, async (tx) => {
    const runId = await findRunOfToday(tx, { benchId, now })
    const ticked = runId ? await findTicked(tx, { runId, revision }) : []
    if (!runId || !ticked.some(({ personId }) => personId === person.id)) return null
    const next = await nextNumber(tx, runId)
    await tx.insert(readings).values({
      runId,
      number: next,
      benchId,
      revision,
      personId: person.id,
      capturedAt: now,
      source: 'typed',
      polarity,
      anodeVolts: volts.value,
      anodeDigitVolts: volts.lastDigit,
      coilAmps: amps.value,
      coilDigitAmps: amps.lastDigit,
      // A glance at a meter is no window: it tells nothing of any scatter.
      windowSeconds: 0,
      uAnodeVolts: 0,
      anodeEffectiveCount: 1,
      uCoilAmps: 0,
      coilEffectiveCount: 1,
      states: {},
    })
    return next
  })
  if (number === null)
    return {
      status: 409,
      reply: refused({
        code: ownCodes.checklistOpen,
        sentence: 'Tick the checklist of this run first: what it asks has to hold before a voltage is on.',
      }),
    }
  return { status: 200, reply: done(`Entered as reading ${number}. ${nextWords(found.bench)}`) }
}

async function nextNumber(tx: Transaction, runId: string): Promise<number> {
  const [last] = await tx
    .select({ number: max(readings.number) })
    .from(readings)
    .where(eq(readings.runId, runId))
  return (last?.number ?? 0) + 1
}
