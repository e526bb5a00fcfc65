import { desc, eq, sql } from 'drizzle-orm'
import { afterAll, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest'
import { acknowledgeCautions } from '#app/benches/acknowledgements.server.ts'
import type { Person } from '#app/context.ts'
import { benchCommands } from '#app/db/schema.ts'
import { action } from '#app/routes/benches/commands.ts'
import { action as makeRoomSafe } from '#app/routes/hall/make-safe.ts'
import { offState } from '#tests/support/bench-state.ts'
import { type ClassSite, openClassSite, outcome } from '#tests/support/class-site.ts'
import { formRequest, ownDatabaseUrl, routeArgs, routeContext } from '#tests/support/database.ts'
import { freePort } from '#tests/support/processes.ts'
import { type StandInBridge, startStandInBridge } from '#tests/support/stand-in-bridge.ts'

const secret = 'a-secret-of-this-test-only'
let bridge: StandInBridge
let site: ClassSite

beforeAll(async () => {
  bridge = await startStandInBridge(secret)
  vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
  vi.stubEnv('BRIDGE_SECRET', secret)
  vi.stubEnv('BRIDGE_URL', bridge.url)
  site = await openClassSite()
})
afterAll(() => bridge.close())

const accepts = (sentence: string) => () => ({
  body: { accepted: true, refusals: [], answer: sentence, state: offState('bench-1') },
})

beforeEach(() => {
  bridge.asked.length = 0
  bridge.answer = accepts('Done.')
})

const ask = (person: Person, fields: Record<string, string>, benchId = 'bench-1') =>
  outcome(
    action(
      routeArgs(formRequest(`/benches/${benchId}/commands`, fields), routeContext(site.db, person), {
        benchId,
      }),
    ),
  )

const newestRow = () => site.db.query.benchCommands.findFirst({ orderBy: desc(sql`rowid`) })
const rowCount = () => site.db.$count(benchCommands)

describe('A command', () => {
  it('reaches the bridge signed, with the person as the actor, and its answer is noted', async () => {
    bridge.answer = accepts('Anode ramps to 200.5 V.')
    expect(await ask(site.student, { kind: 'set-anode', volts: '200,5' })).toEqual({
      status: 200,
      body: { ok: true, answer: 'Anode ramps to 200.5 V.' },
    })
    expect(bridge.asked).toEqual([
      {
        method: 'POST',
        path: '/benches/bench-1/commands',
        body: {
          actor: { personId: site.student.id, name: 'Kofi Adeyemi', role: 'student', acknowledged: false },
          command: { kind: 'set-anode', volts: 200.5 },
        },
      },
    ])
    expect(await newestRow()).toMatchObject({
      benchId: 'bench-1',
      personId: site.student.id,
      kind: 'set-anode',
      asked: { volts: 200.5 },
      outcome: 'accepted',
      answer: 'Anode ramps to 200.5 V.',
    })
  })

  it('vouches for the cautions only once this person has acknowledged them', async () => {
    await acknowledgeCautions(site.db, { personId: site.partner.id })
    await ask(site.partner, { kind: 'take-controls' })
    await ask(site.instructor, { kind: 'take-controls' })
    expect(bridge.asked.map(({ body }) => (body as { actor: object }).actor)).toMatchObject([
      { personId: site.partner.id, acknowledged: true },
      { personId: site.instructor.id, acknowledged: false },
    ])
  })

  it('is noted before the bridge is asked', async () => {
    let noted: Awaited<ReturnType<typeof newestRow>>
    bridge.answer = async () => {
      noted = await newestRow()
      return accepts('Coils ramp to 1.5 A.')()
    }
    await ask(site.student, { kind: 'set-coils', amps: '1.5' })
    expect(noted).toMatchObject({ kind: 'set-coils', asked: { amps: 1.5 }, outcome: null, answer: null })
  })

  it.each([
    [
      { kind: 'switch-heater', on: 'true' },
      { kind: 'switch-heater', on: true },
    ],
    [
      { kind: 'switch-heater', on: 'false' },
      { kind: 'switch-heater', on: false },
    ],
    [
      { kind: 'set-polarity', polarity: '-1' },
      { kind: 'set-polarity', polarity: -1 },
    ],
    [
      { kind: 'set-coils', amps: ' .75 ' },
      { kind: 'set-coils', amps: 0.75 },
    ],
    [
      { kind: 'set-anode', volts: '−5' },
      { kind: 'set-anode', volts: -5 },
    ],
    [
      { kind: 'set-anode', volts: '0' },
      { kind: 'set-anode', volts: 0 },
    ],
    [{ kind: 'release-controls' }, { kind: 'release-controls' }],
    [{ kind: 'reset-trip' }, { kind: 'reset-trip' }],
    [{ kind: 'make-safe' }, { kind: 'make-safe' }],
  ])('%j is sent as %j', async (fields, command) => {
    expect((await ask(site.student, fields)).status).toBe(200)
    expect(bridge.asked[0]?.body).toMatchObject({ command })
  })

  it.each([
    ['', 'Type the anode voltage in volts.'],
    ['   ', 'Type the anode voltage in volts.'],
    ['abc', '“abc” is not a number. Type the anode voltage in volts, as in 1.5 or 1,5.'],
    ['NaN', '“NaN” is not a number. Type the anode voltage in volts, as in 1.5 or 1,5.'],
    ['Infinity', '“Infinity” is not a number. Type the anode voltage in volts, as in 1.5 or 1,5.'],
    ['0x10', 'Type only the number of volts: “0x10” has something behind it.'],
    ['200 V', 'Type only the number of volts: “200 V” has something behind it.'],
    ['1.000,5', '“1.000,5” is not a number. Type the anode voltage in volts, as in 1.5 or 1,5.'],
    ['1e999', '“1e999” is too large to be the anode voltage.'],
  ])('with %j for the volts is an error beside the field, and nobody is asked', async (volts, error) => {
    const rows = await rowCount()
    expect(await ask(site.student, { kind: 'set-anode', volts })).toEqual({
      status: 400,
      body: { ok: false, errors: { volts: [error] }, refusals: [] },
    })
    expect(bridge.asked).toEqual([])
    expect(await rowCount()).toBe(rows)
  })

  it.each([
    [{}, 'kind'],
    [{ kind: 'explode' }, 'kind'],
    [{ kind: 'set-anode' }, 'volts'],
    [{ kind: 'switch-heater', on: 'yes' }, 'on'],
    [{ kind: 'set-polarity', polarity: '2' }, 'polarity'],
    [{ kind: 'hand-over' }, 'toPersonId'],
    [{ kind: 'hand-over', toPersonId: 'nobody' }, 'toPersonId'],
  ] as [Record<string, string>, string][])('%j is refused beside the field %s', async (fields, field) => {
    const { status, body } = await ask(site.student, fields)
    expect(status).toBe(400)
    expect(Object.keys((body as { errors: object }).errors)).toEqual([field])
    expect(bridge.asked).toEqual([])
  })
})

describe('A refusal', () => {
  it('of the bridge comes back in its own sentences, and is noted', async () => {
    const refusals = [
      { code: 'above-limit', sentence: 'The limit of this bench is 300 V: 340 V is 40 V above it.' },
      { code: 'heater-off', sentence: 'Switch the heater on first.' },
    ]
    bridge.answer = () => ({
      body: { accepted: false, refusals, answer: '', state: offState('bench-1') },
    })
    expect(await ask(site.student, { kind: 'set-anode', volts: '340' })).toEqual({
      status: 409,
      body: { ok: false, errors: {}, refusals },
    })
    expect(await newestRow()).toMatchObject({
      asked: { volts: 340 },
      outcome: 'refused',
      answer: `${refusals[0]?.sentence} ${refusals[1]?.sentence}`,
    })
  })

  it('of a student who would take over is given and noted without asking the bridge', async () => {
    const { status, body } = await ask(site.student, { kind: 'take-over' })
    expect(status).toBe(403)
    expect(body).toMatchObject({ refusals: [{ code: 'not-permitted' }] })
    expect(bridge.asked).toEqual([])
    expect(await newestRow()).toMatchObject({ kind: 'take-over', outcome: 'refused' })
  })

  it('meets a bench of another class as if there were none', async () => {
    const rows = await rowCount()
    for (const fields of [{ kind: 'take-controls' }, { kind: 'make-safe' }])
      expect((await ask(site.outsider, fields)).status).toBe(404)
    expect((await ask(site.student, { kind: 'take-controls' }, 'bench-9')).status).toBe(404)
    expect(bridge.asked).toEqual([])
    expect(await rowCount()).toBe(rows)
  })
})

describe('Handing the controls over', () => {
  it('names the other person, with their role and whether they have acknowledged the cautions', async () => {
    await acknowledgeCautions(site.db, { personId: site.partner.id })
    await ask(site.student, { kind: 'hand-over', toPersonId: site.partner.id })
    await ask(site.student, { kind: 'hand-over', toPersonId: site.instructor.id })
    expect(bridge.asked.map(({ body }) => (body as { command: object }).command)).toEqual([
      {
        kind: 'hand-over',
        toPersonId: site.partner.id,
        toName: 'Runa Lindqvist',
        toRole: 'student',
        toAcknowledged: true,
      },
      {
        kind: 'hand-over',
        toPersonId: site.instructor.id,
        toName: 'Mina Oyelaran',
        toRole: 'instructor',
        toAcknowledged: false,
      },
    ])
  })

  it('is not possible to oneself or to a student of another class', async () => {
    for (const toPersonId of [site.student.id, site.outsider.id])
      expect((await ask(site.student, { kind: 'hand-over', toPersonId })).status).toBe(400)
  })
})

describe('A bridge in trouble', () => {
  const troubled = async (fields: Record<string, string> = { kind: 'set-anode', volts: '100' }) => {
    const { status, body } = await ask(site.student, fields)
    const [refusal] = (body as { refusals: { code: string; sentence: string }[] }).refusals
    return { status, ...refusal, row: await newestRow() }
  }

  it('that does not answer in time leaves it open whether the command was carried out', async () => {
    bridge.answer = () => 'silence'
    const started = Date.now()
    const { status, code, sentence, row } = await troubled()
    expect(Date.now() - started).toBeLessThan(6000)
    expect({ status, code }).toEqual({ status: 503, code: 'bridge-silent' })
    expect(sentence).toMatch(/whether this was done is not known.*treat the tube as live/)
    expect(row).toMatchObject({ outcome: 'unanswered', answer: sentence })
  })

  it.each([
    ['answers what is no JSON', { body: '<html>' }, 'unanswered'],
    ['answers another shape', { body: { accepted: 'yes' } }, 'unanswered'],
    ['fails', { status: 500, body: {} }, 'unanswered'],
    ['does not know the bench', { status: 404, body: {} }, 'refused'],
    ['does not trust the signature', { status: 401, body: {} }, 'refused'],
  ])('that %s is a sentence and a row, never an exception', async (_, answer, kept) => {
    bridge.answer = () => answer
    vi.spyOn(console, 'error').mockImplementationOnce(() => {})
    const { status, code, row } = await troubled()
    expect({ status, code }).toEqual({ status: 503, code: 'bridge-silent' })
    expect(row?.outcome).toBe(kept)
    vi.restoreAllMocks()
  })
})

describe('Make safe', () => {
  it('is sent although the log cannot be written to', async () => {
    bridge.answer = accepts('Anode off, coils off, heater off.')
    const complaint = vi.spyOn(console, 'error').mockImplementation(() => {})
    await site.db.run(sql`alter table bench_commands rename to away`)
    try {
      expect(await ask(site.student, { kind: 'make-safe' })).toMatchObject({ status: 200 })
      expect(bridge.asked[0]?.body).toMatchObject({ command: { kind: 'make-safe' } })
      expect(complaint).toHaveBeenCalled()
      await expect(
        action(
          routeArgs(
            formRequest('/benches/bench-1/commands', { kind: 'take-controls' }),
            routeContext(site.db, site.student),
            { benchId: 'bench-1' },
          ),
        ),
      ).rejects.toThrow()
    } finally {
      await site.db.run(sql`alter table away rename to bench_commands`)
      complaint.mockRestore()
    }
    expect(bridge.asked).toHaveLength(1)
  })

  it('for the room is asked of the bridge by staff, answered bench by bench, and noted', async () => {
    bridge.answer = () => ({
      body: {
        benches: [
          { benchId: 'bench-1', answer: 'Off commanded, 0.4 V measured.' },
          { benchId: 'bench-2', answer: 'Heater not confirmed.' },
        ],
      },
    })
    const context = routeContext(site.db, site.instructor)
    const result = await outcome(makeRoomSafe(routeArgs(formRequest('/make-safe', {}), context, {})))
    const answer = 'Bench 1: Off commanded, 0.4 V measured. Bench 2: Heater not confirmed.'
    expect(result).toEqual({ status: 200, body: { ok: true, answer } })
    expect(bridge.asked).toMatchObject([
      { path: '/make-safe', body: { actor: { personId: site.instructor.id, role: 'instructor' } } },
    ])
    const [row] = await site.db.select().from(benchCommands).where(eq(benchCommands.kind, 'make-room-safe'))
    expect(row).toMatchObject({ benchId: null, personId: site.instructor.id, outcome: 'accepted', answer })
  })
})

describe('A bridge that is not there', () => {
  it('was never reached, so nothing was commanded', async () => {
    const { environment } = await import('#app/env.server.ts')
    const env = environment()
    const before = env.BRIDGE_URL
    env.BRIDGE_URL = `http://127.0.0.1:${await freePort()}`
    const { status, body } = await ask(site.student, { kind: 'take-controls' })
    env.BRIDGE_URL = before
    expect(status).toBe(503)
    expect(body).toMatchObject({
      refusals: [{ code: 'bridge-silent', sentence: expect.stringContaining('nothing was commanded') }],
    })
    expect(await newestRow()).toMatchObject({ outcome: 'unanswered' })
  })
})
