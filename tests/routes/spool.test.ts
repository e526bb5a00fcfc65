import { eq, sql } from 'drizzle-orm'
import fc from 'fast-check'
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { signRequest } from '#app/bridge-link/signature.server.ts'
import { storeBatch } from '#app/bridge-link/spool.server.ts'
import type { Database } from '#app/db/client.server.ts'
import { openDatabase } from '#app/db/client.server.ts'
import { demoBenches } from '#app/db/demo-benches.ts'
import { benchEvents, channelSummaries } from '#app/db/schema.ts'
import { seedDemo } from '#app/db/seed.server.ts'
import type { Summary } from '#app/protocol/commands.ts'
import { configurationSchema, spoolBatchSchema } from '#app/protocol/commands.ts'
import type { BenchEvent } from '#app/protocol/messages.ts'
import { loader as configuration } from '#app/routes/api/bridge-configuration.ts'
import { action } from '#app/routes/api/bridge-spool.ts'
import { outcome } from '#tests/support/class-site.ts'
import { ownDatabaseUrl, routeArgs, routeContext } from '#tests/support/database.ts'

const secret = 'a-secret-of-this-test-only'
let db: Database

beforeAll(async () => {
  vi.stubEnv('BRIDGE_SECRET', secret)
  db = await openDatabase(ownDatabaseUrl())
})
afterAll(() => db.$client.close())

const event = (sequence: number): BenchEvent => ({
  sequence,
  benchId: 'bench-1',
  at: 1_780_000_000.25 + sequence,
  kind: 'warning',
  personId: null,
  personName: null,
  sentence: `Event ${sequence}.`,
  data: { number: sequence },
})

const summary = (sequence: number): Summary => ({
  sequence,
  benchId: 'bench-1',
  second: 1_780_000_000 + sequence,
  channel: 'anodeVolts',
  min: 199.9,
  mean: 200.01,
  max: 200.1,
  count: 10,
})

const range = (first: number, last: number) =>
  Array.from({ length: Math.max(0, last - first + 1) }, (_, index) => first + index)

/** Of a bridge that has never been told to forget anything. */
const oldest = { event: 1, summary: 1 }

const send = (bridgeId: string, events: number[], summaries: number[] = []) =>
  storeBatch(db, { bridgeId, oldest, events: events.map(event), summaries: summaries.map(summary) })

const storedEvents = async (bridgeId: string) =>
  (
    await db
      .select()
      .from(benchEvents)
      .where(eq(benchEvents.bridgeId, bridgeId))
      .orderBy(benchEvents.sequence)
  ).map(({ sequence }) => sequence)

describe('A batch of the bridge’s spool', () => {
  it('is stored as it was told, and confirmed', async () => {
    expect(await send('room-a', [1, 2], [1])).toEqual({ confirmedEvent: 2, confirmedSummary: 1 })
    const [first] = await db.select().from(benchEvents).where(eq(benchEvents.bridgeId, 'room-a'))
    expect(first).toMatchObject({
      sequence: 1,
      benchId: 'bench-1',
      happenedAt: new Date(1_780_000_001_250),
      sentence: 'Event 1.',
      data: { number: 1 },
    })
    const [second] = await db.select().from(channelSummaries).where(eq(channelSummaries.bridgeId, 'room-a'))
    expect(second).toMatchObject({ second: 1_780_000_001, min: 199.9, mean: 200.01, max: 200.1, count: 10 })
  })

  it('sent twice is stored once, also when both arrive at the same time', async () => {
    await Promise.all([send('room-b', range(1, 50)), send('room-b', range(1, 50))])
    expect(await send('room-b', range(1, 50))).toMatchObject({ confirmedEvent: 50 })
    expect(await storedEvents('room-b')).toEqual(range(1, 50))
  })

  it('that overlaps the one before adds only what is new', async () => {
    await send('room-c', range(1, 30))
    expect(await send('room-c', range(20, 45))).toMatchObject({ confirmedEvent: 45 })
    expect(await storedEvents('room-c')).toEqual(range(1, 45))
  })

  it('that comes before its predecessor is kept, and not confirmed until the gap is filled', async () => {
    expect(await send('room-d', range(11, 20))).toMatchObject({ confirmedEvent: 0 })
    expect(await send('room-d', range(31, 40))).toMatchObject({ confirmedEvent: 0 })
    expect(await send('room-d', range(1, 10))).toMatchObject({ confirmedEvent: 20 })
    expect(await send('room-d', range(21, 30))).toMatchObject({ confirmedEvent: 40 })
  })

  it('that has numbers of what is here for something else changes and confirms none of that, and says where to go on', async () => {
    await send('room-e', range(1, 5), range(1, 7))
    const changed = range(4, 6).map((sequence) => ({ ...event(sequence), sentence: 'Something else.' }))
    const batch = {
      bridgeId: 'room-e',
      oldest,
      events: [...range(2, 3).map(event), ...changed],
      summaries: [],
    }
    expect(await storeBatch(db, batch)).toEqual({
      confirmedEvent: 3,
      confirmedSummary: 7,
      continueAfter: { event: 5 },
    })
    const other = { ...summary(2), mean: 7 }
    expect(await storeBatch(db, { bridgeId: 'room-e', oldest, events: [], summaries: [other] })).toEqual({
      confirmedEvent: 5,
      confirmedSummary: 1,
      continueAfter: { summary: 7 },
    })
    const rows = await db.select().from(benchEvents).where(eq(benchEvents.bridgeId, 'room-e'))
    expect(rows.map(({ sentence }) => sentence)).toEqual(range(1, 5).map((number) => `Event ${number}.`))
  })

  it('is of one bridge: another’s numbers are its own', async () => {
    await send('room-f', range(1, 5))
    expect(await send('room-g', range(1, 3))).toMatchObject({ confirmedEvent: 3 })
    expect(await send('room-f', [])).toMatchObject({ confirmedEvent: 5 })
  })

  it('may hold more rows than one statement takes', async () => {
    expect(await send('room-h', range(1, 700), range(1, 2500))).toEqual({
      confirmedEvent: 700,
      confirmedSummary: 2500,
    })
  })

  it('loses nothing and doubles nothing in any order with any repeats, and no mark passes a gap (property)', async () => {
    let room = 0
    await fc.assert(
      fc.asyncProperty(
        fc.array(fc.tuple(fc.integer({ min: 1, max: 30 }), fc.integer({ min: 0, max: 9 })), {
          maxLength: 12,
        }),
        async (batches) => {
          const bridgeId = `random-${room++}`
          const sent = new Set<number>()
          for (const [first, more] of batches) {
            for (const number of range(first, first + more)) sent.add(number)
            const { confirmedEvent } = await send(bridgeId, range(first, first + more))
            let contiguous = 0
            while (sent.has(contiguous + 1)) contiguous += 1
            expect(confirmedEvent).toBe(contiguous)
          }
          expect(await storedEvents(bridgeId)).toEqual([...sent].sort((a, b) => a - b))
        },
      ),
      { numRuns: 40, seed: 1 },
    )
  })

  it('that fails half way leaves neither rows nor a mark', async () => {
    const bad = { ...summary(2), mean: Number.NaN }
    await expect(
      storeBatch(db, { bridgeId: 'room-i', oldest, events: [event(1)], summaries: [summary(1), bad] }),
    ).rejects.toThrow()
    expect(await storedEvents('room-i')).toEqual([])
    expect(await send('room-i', [1], [1, 2])).toEqual({ confirmedEvent: 1, confirmedSummary: 2 })
  })

  it('takes no more than a bridge ever sends at once, and no less than its name and what it holds', () => {
    const good = { bridgeId: 'room-1', oldest, events: [], summaries: [] }
    expect(spoolBatchSchema.safeParse(good).success).toBe(true)
    for (const over of [
      { events: range(1, 1001).map(event) },
      { summaries: range(1, 5001).map(summary) },
      { bridgeId: '' },
      { bridgeId: 'x'.repeat(101) },
      { oldest: { event: 0, summary: 1 } },
      { oldest: undefined },
    ])
      expect(
        spoolBatchSchema.safeParse({ ...good, ...over }).success,
        JSON.stringify(over).slice(0, 50),
      ).toBe(false)
  })
})

describe('The spool’s route', () => {
  const post = (body: string, headers: Record<string, string>) =>
    new Request('http://127.0.0.1:3000/api/bridge/spool', { method: 'POST', body, headers })
  const signed = (body: string, over: { secret?: string; now?: number; path?: string } = {}) =>
    signRequest({ method: 'POST', path: '/api/bridge/spool', body, secret, ...over })
  const batch = (sequence: number) =>
    JSON.stringify({ bridgeId: 'route', oldest, events: [event(sequence)], summaries: [] })
  const call = async (request: Request) => {
    const result = await action(routeArgs(request, routeContext(db), {})).catch((thrown: unknown) => thrown)
    if (!(result instanceof Response)) throw result
    return { status: result.status, body: await result.json() }
  }

  it('takes a signed batch', async () => {
    const body = batch(1)
    expect(await call(post(body, signed(body)))).toEqual({
      status: 200,
      body: { confirmedEvent: 1, confirmedSummary: 0 },
    })
  })

  it.each([
    ['unsigned', {}],
    ['signed with another secret', signed(batch(2), { secret: 'another-secret-altogether' })],
    ['signed for another path', signed(batch(2), { path: '/api/bridge/configuration' })],
    ['signed for another body', signed(batch(3))],
    ['signed two minutes ago', signed(batch(2), { now: Date.now() / 1000 - 120 })],
    ['signed two minutes ahead', signed(batch(2), { now: Date.now() / 1000 + 120 })],
    ['signed at no time', { ...signed(batch(2)), 'coilside-time': 'now' }],
  ])('refuses a batch that is %s, and stores nothing of it', async (_, headers) => {
    expect((await call(post(batch(2), headers))).status).toBe(401)
    expect(await storedEvents('route')).toEqual([1])
  })

  it('refuses the same signed request a second time', async () => {
    const body = batch(1)
    const headers = signed(body)
    expect((await call(post(body, headers))).status).toBe(200)
    expect(await call(post(body, headers))).toEqual({
      status: 401,
      body: { reason: 'This request was here before.' },
    })
  })

  it.each([
    '',
    'no json',
    '{}',
    '{"bridgeId":"route","oldest":{"event":1,"summary":1},"events":[{"sequence":-1}],"summaries":[]}',
  ])('answers 400 with the reason to the signed body %j', async (body) => {
    const { status, body: reply } = await call(post(body, signed(body)))
    expect(status).toBe(400)
    expect(reply.reason).toBeTruthy()
  })
})

describe('The configuration for the bridge', () => {
  const ask = (headers: Record<string, string>) =>
    outcome(
      configuration(
        routeArgs(
          new Request('http://127.0.0.1:3000/api/bridge/configuration', { headers }),
          routeContext(db),
          {},
        ),
      ),
    )

  it('is the newest revision of each bench, for a signed request only', async () => {
    await seedDemo(db)
    await db.run(sql`insert into bench_revisions (bench_id, revision, config, note)
      select bench_id, 2, json_set(config, '$.revision', 2), 'moved' from bench_revisions where bench_id = 'bench-2'`)
    const headers = signRequest({ method: 'GET', path: '/api/bridge/configuration', body: '', secret })
    const response = await configuration(
      routeArgs(
        new Request('http://127.0.0.1:3000/api/bridge/configuration', { headers }),
        routeContext(db),
        {},
      ),
    )
    const { benches } = configurationSchema.parse(await response.json())
    expect(benches.map(({ benchId, revision }) => [benchId, revision])).toEqual([
      ['bench-1', 1],
      ['bench-2', 2],
      ['bench-3', 1],
    ])
    expect(benches[0]).toEqual(demoBenches[0])
    expect((await ask({})).status).toBe(401)
    expect((await ask(headers)).status).toBe(401)
  })
})
