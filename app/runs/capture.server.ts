import { and, eq, max } from 'drizzle-orm'
import { type Answered, done, noInstruments, ownCodes, refused } from '../benches/action-reply.ts'
import { resolveActor } from '../benches/actor.server.ts'
import { nextWords } from '../benches/scale.ts'
import { requireVisibleBench } from '../benches/visible-benches.server.ts'
import { askCapture } from '../bridge-link/bridge-client.server.ts'
import type { Person } from '../context.ts'
import { type Database, write } from '../db/client.server.ts'
import { benchRevisions, readingSamples, readings } from '../db/schema.ts'
import type { Capture } from '../protocol/commands.ts'
import { channels } from '../safety/types.ts'
import { runOfToday } from './runs.server.ts'

/**
 * Asks the bridge for the settled window of now and stores it as the next reading of the bench's run: raw samples,
 * statistics, the state of each channel, and the revision that it was taken under.
 * Throws a 404 for a bench this person may not watch.
 */
export async function captureReading(
  db: Database,
  { benchId, person }: { benchId: string; person: Pick<Person, 'id' | 'name' | 'role'> },
): Promise<Answered> {
  const { config } = await requireVisibleBench(db, { benchId, person })
  if (config.instruments === null) return { status: 409, reply: noInstruments }
  const answer = await askCapture(benchId, { actor: await resolveActor(db, person) })
  if (answer.kind !== 'answered')
    return {
      status: 503,
      reply: refused({ code: ownCodes.bridgeSilent, sentence: `${answer.sentence} No reading was stored.` }),
    }
  if (!answer.reply.accepted) return { status: 409, reply: refused(...answer.reply.refusals) }

  const fault = await findFault(db, benchId, answer.reply.capture)
  if (fault) return { status: 503, reply: refused({ code: ownCodes.bridgeSilent, sentence: fault }) }
  const number = await storeCapture(db, { capture: answer.reply.capture, personId: person.id })
  return { status: 200, reply: done(`Captured as reading ${number}. ${nextWords(config)}`) }
}

/** Why a window cannot become a reading, in a sentence, or null. */
async function findFault(db: Database, benchId: string, capture: Capture): Promise<string | null> {
  const { statistics, samples, times, revision } = capture
  const isWhole = Object.values(samples).every((values) => values.length === times.length)
  if (capture.benchId !== benchId || !isWhole || !statistics.anodeVolts || !statistics.coilAmps)
    return 'The bridge sent a window that is not whole, so no reading was stored. Capture again; if it stays so, tell the technician.'
  const known = await db.query.benchRevisions.findFirst({
    where: and(eq(benchRevisions.benchId, benchId), eq(benchRevisions.revision, revision)),
    columns: { revision: true },
  })
  return known
    ? null
    : `The bridge works with revision ${revision} of this bench, which is not stored here, so no reading was stored. Tell the technician.`
}

/** Stores one window as a reading. Returns its number in the run. */
export function storeCapture(
  db: Database,
  { capture, personId, now = new Date() }: { capture: Capture; personId: string; now?: Date },
): Promise<number> {
  const { benchId, statistics } = capture
  const { anodeVolts, coilAmps } = statistics
  if (!anodeVolts || !coilAmps) throw new RangeError('A reading needs the anode voltage and the coil current')
  return write(db, async (tx) => {
    const runId = await runOfToday(tx, { benchId, personId, now })
    const [last] = await tx
      .select({ number: max(readings.number) })
      .from(readings)
      .where(eq(readings.runId, runId))
    const number = (last?.number ?? 0) + 1
    const [reading] = await tx
      .insert(readings)
      .values({
        runId,
        number,
        benchId,
        revision: capture.revision,
        personId,
        capturedAt: new Date(capture.at * 1000),
        windowSeconds: capture.windowSeconds,
        polarity: capture.polarity,
        anodeVolts: anodeVolts.mean,
        uAnodeVolts: anodeVolts.standardError,
        anodeEffectiveCount: anodeVolts.effectiveCount,
        coilAmps: coilAmps.mean,
        uCoilAmps: coilAmps.standardError,
        coilEffectiveCount: coilAmps.effectiveCount,
        states: capture.states,
      })
      .returning({ id: readings.id })
    if (!reading) throw new Error('The reading was not stored')
    const rows = sampleRows(capture).map((row) => ({ ...row, readingId: reading.id }))
    if (rows.length > 0) await tx.insert(readingSamples).values(rows)
    return number
  })
}

function sampleRows({ samples, times, statistics }: Capture) {
  const timesSeconds = packDoubles(times)
  return channels.flatMap((channel) => {
    const values = samples[channel]
    if (!values) return []
    const figures = statistics[channel]
    return [
      {
        channel,
        timesSeconds,
        values: packDoubles(values),
        mean: figures?.mean ?? null,
        standardDeviation: figures?.standardDeviation ?? null,
        standardError: figures?.standardError ?? null,
        effectiveCount: figures?.effectiveCount ?? null,
        count: figures?.count ?? values.filter((value) => value !== null).length,
      },
    ]
  })
}

/** Little-endian float64, NaN where there was no reading. */
function packDoubles(values: (number | null)[]): Buffer {
  const buffer = Buffer.alloc(values.length * 8)
  for (const [index, value] of values.entries()) buffer.writeDoubleLE(value ?? Number.NaN, index * 8)
  return buffer
}

export function unpackDoubles(bytes: Uint8Array): Float64Array {
  const view = new DataView(bytes.buffer, bytes.byteOffset, bytes.byteLength)
  return Float64Array.from({ length: bytes.byteLength / 8 }, (_, index) => view.getFloat64(index * 8, true))
}
