import { eq } from 'drizzle-orm'
import * as z from 'zod'
import { type Capability, may } from '../auth/capabilities.ts'
import { type BridgeAnswer, sendCommand, sendRoomMakeSafe } from '../bridge-link/bridge-client.server.ts'
import type { Person } from '../context.ts'
import { type Database, write } from '../db/client.server.ts'
import { benchCommands, benches } from '../db/schema.ts'
import type { Command } from '../protocol/commands.ts'
import { hasAcknowledged } from './acknowledgements.server.ts'
import { type Answered, done, fieldErrors, noInstruments, ownCodes, refused } from './action-reply.ts'
import { resolveActor } from './actor.server.ts'
import { type CommandForm, commandFormSchema } from './forms.ts'
import { listWatchers, requireVisibleBench } from './visible-benches.server.ts'

type Asker = Pick<Person, 'id' | 'name' | 'role'>

/** What each command needs at the least. Whether it may be done now is the bridge's to say. */
const needs: Record<Command['kind'], Capability> = {
  'take-controls': 'take-controls',
  'take-over': 'take-over',
  'hand-over': 'take-controls',
  'release-controls': 'take-controls',
  'switch-heater': 'take-controls',
  'set-anode': 'take-controls',
  'set-coils': 'take-controls',
  'set-polarity': 'take-controls',
  'reset-trip': 'reset-trip',
  'make-safe': 'make-bench-safe',
}

/**
 * Reads a command from a form, notes who asks what, asks the bridge and notes what it answered. The row is there before
 * the bridge is asked, so nothing is ever done that is not in the log. Throws a 404 for a bench this person may not watch.
 */
export async function commandBench(
  db: Database,
  { benchId, person, form }: { benchId: string; person: Asker; form: FormData },
): Promise<Answered> {
  const { config } = await requireVisibleBench(db, { benchId, person })
  if (config.instruments === null) return { status: 409, reply: noInstruments }
  const parsed = commandFormSchema.safeParse(Object.fromEntries(form))
  if (!parsed.success) return { status: 400, reply: fieldErrors(z.flattenError(parsed.error).fieldErrors) }

  const command = await resolveCommand(db, { benchId, person, form: parsed.data })
  if (!command)
    return {
      status: 400,
      reply: fieldErrors({ toPersonId: ['Choose someone else who may watch this bench.'] }),
    }
  const { kind, ...asked } = command
  const note = await noteCommand(db, { benchId, personId: person.id, kind, asked })

  if (!may(person.role, needs[kind])) {
    const sentence =
      kind === 'take-over'
        ? 'Only an instructor or a technician may take over from someone: ask them, or wait until the controls are free.'
        : 'Your role does not allow this.'
    await note('refused', sentence)
    return { status: 403, reply: refused({ code: ownCodes.notPermitted, sentence }) }
  }

  const answer = await sendCommand(benchId, { actor: await resolveActor(db, person), command })
  if (answer.kind !== 'answered') return noteSilence(answer, note)
  const { accepted, refusals, answer: sentence } = answer.reply
  if (accepted) {
    await note('accepted', sentence)
    return { status: 200, reply: done(sentence) }
  }
  await note('refused', refusals.map((refusal) => refusal.sentence).join(' ') || sentence)
  return { status: 409, reply: refused(...refusals) }
}

/** Makes every bench of the room safe. The caller has checked that this person may. */
export async function makeRoomSafe(db: Database, { person }: { person: Asker }): Promise<Answered> {
  const note = await noteCommand(db, {
    benchId: null,
    personId: person.id,
    kind: 'make-room-safe',
    asked: {},
  })
  const answer = await sendRoomMakeSafe({ actor: await resolveActor(db, person) })
  if (answer.kind !== 'answered') return noteSilence(answer, note)
  const nameOf = await benchNames(db)
  const sentence =
    answer.reply.benches.map((bench) => `${nameOf(bench.benchId)}: ${bench.answer}`).join(' ') ||
    'The bridge has no bench.'
  await note('accepted', sentence)
  return { status: 200, reply: done(sentence) }
}

/** Names of the benches; their ids where the database cannot be read. */
async function benchNames(db: Database): Promise<(benchId: string) => string> {
  const rows = await db
    .select({ id: benches.id, name: benches.name })
    .from(benches)
    .catch(() => [])
  const names = new Map(rows.map(({ id, name }) => [id, name]))
  return (benchId) => names.get(benchId) ?? benchId
}

/** The form as a command for the bridge. Null when the controls would go to someone who may not watch this bench. */
async function resolveCommand(
  db: Database,
  { benchId, person, form }: { benchId: string; person: Asker; form: CommandForm },
): Promise<Command | null> {
  if (form.kind !== 'hand-over') return form
  const heir = (await listWatchers(db, benchId)).find(({ id }) => id === form.toPersonId && id !== person.id)
  if (!heir) return null
  return {
    kind: 'hand-over',
    toPersonId: heir.id,
    toName: heir.name,
    toRole: heir.role,
    toAcknowledged: await hasAcknowledged(db, heir.id),
  }
}

type Note = (outcome: 'accepted' | 'refused' | 'unanswered', answer: string) => Promise<void>

async function noteCommand(
  db: Database,
  values: { benchId: string | null; personId: string; kind: string; asked: Record<string, unknown> },
): Promise<Note> {
  const id = crypto.randomUUID()
  const isMakeSafe = values.kind === 'make-safe' || values.kind === 'make-room-safe'
  // A database that cannot be written to must not keep a bench live: make safe goes on without its row.
  const store = async (writing: Promise<unknown>) => {
    if (!isMakeSafe) return void (await writing)
    await writing.catch((error: unknown) => console.error('A make safe was not noted:', error))
  }
  const askedAt = new Date()
  await store(write(db, (tx) => tx.insert(benchCommands).values({ id, ...values, askedAt })))
  return (outcome, answer) => {
    const answered = { outcome, answer, answeredAt: new Date() }
    return store(write(db, (tx) => tx.update(benchCommands).set(answered).where(eq(benchCommands.id, id))))
  }
}

async function noteSilence(
  answer: Exclude<BridgeAnswer<never>, { kind: 'answered' }>,
  note: Note,
): Promise<Answered> {
  await note(answer.kind === 'rejected' ? 'refused' : 'unanswered', answer.sentence)
  return { status: 503, reply: refused({ code: ownCodes.bridgeSilent, sentence: answer.sentence }) }
}
