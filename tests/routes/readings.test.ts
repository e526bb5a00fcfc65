import { asc, eq, sql } from 'drizzle-orm'
import { afterAll, afterEach, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest'
import { loadBenchView } from '#app/benches/bench-view.server.ts'
import type { Person } from '#app/context.ts'
import { demoBenches } from '#app/db/demo-benches.ts'
import { benchRevisions, edges, readingSamples, readings, runs } from '#app/db/schema.ts'
import type { Capture } from '#app/protocol/commands.ts'
import { action as enterEdges } from '#app/routes/benches/edges.ts'
import { action as capture } from '#app/routes/benches/readings.ts'
import { action as newRun } from '#app/routes/benches/runs.ts'
import { action as strike } from '#app/routes/benches/strike.ts'
import { storeCapture, unpackDoubles } from '#app/runs/capture.server.ts'
import { type ClassSite, openClassSite, outcome } from '#tests/support/class-site.ts'
import { formRequest, ownDatabaseUrl, routeArgs, routeContext } from '#tests/support/database.ts'
import { expectNear } from '#tests/support/near.ts'
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

const times = [100, 100.1, 100.2, 100.3]

/** A window of bench 1 at 200 V and 1.5 A, with one gap in the coil current. */
function settledWindow(over: Partial<Capture> = {}): Capture {
  const figures = { standardDeviation: 0.02, standardError: 0.01, effectiveCount: 4, count: 4 }
  return {
    benchId: 'bench-1',
    revision: 1,
    at: 1_780_000_000.5,
    windowSeconds: 5,
    polarity: 1,
    times,
    samples: { anodeVolts: [200.01, 199.99, 200.02, 199.98], coilAmps: [1.5, null, 1.5001, 1.4999] },
    statistics: {
      anodeVolts: { ...figures, mean: 200 },
      coilAmps: { ...figures, mean: 1.5, standardError: 0.0001, effectiveCount: 3, count: 3 },
    },
    states: {
      anodeVolts: { state: 'settled', mean: 200, standardDeviation: 0.02, driftPerSecond: 0, reason: '' },
    },
    ...over,
  }
}

const path = '/benches/bench-1/readings'
const args = (person: Person, fields: Record<string, string>, params: Record<string, string>) =>
  routeArgs(formRequest(path, fields), routeContext(site.db, person), {
    benchId: 'bench-1',
    ...params,
  }) as never

const take = (person: Person, window: Capture = settledWindow(), benchId = 'bench-1') => {
  bridge.answer = () => ({ body: { accepted: true, capture: window } })
  return outcome(capture(args(person, {}, { benchId })))
}
const enter = (person: Person, readingId: string, left: string, right: string, benchId = 'bench-1') =>
  outcome(enterEdges(args(person, { left, right }, { benchId, readingId })))
const strikeOut = (person: Person, readingId: string, reason: string, benchId = 'bench-1') =>
  outcome(strike(args(person, { reason }, { benchId, readingId })))

const view = (person: Person = site.student) => loadBenchView(site.db, { benchId: 'bench-1', person })
const newest = async () => {
  const reading = (await view()).readings.at(-1)
  if (!reading) throw new Error('There is no reading')
  return reading
}

/** Each test begins a run of its own. */
beforeEach(async () => {
  bridge.asked.length = 0
  await outcome(newRun(args(site.student, {}, {})))
})

describe('A capture', () => {
  it('stores what the bridge measured: values, raw samples to the last bit, statistics, states, revision', async () => {
    expect(await take(site.student)).toEqual({
      status: 200,
      body: { ok: true, answer: 'Captured as reading 1. Now read both edges.' },
    })
    expect(bridge.asked).toMatchObject([
      { path: '/benches/bench-1/captures', body: { actor: { personId: site.student.id } } },
    ])
    const reading = await newest()
    expect(reading).toMatchObject({
      number: 1,
      by: 'Kofi Adeyemi',
      capturedAt: new Date(1_780_000_000_500).toISOString(),
      revision: 1,
      polarity: 1,
      anodeVolts: 200,
      anodeStandardErrorVolts: 0.01,
      coilAmps: 1.5,
      coilStandardErrorAmps: 0.0001,
      edges: [],
      result: null,
      struck: null,
    })
    const samples = await site.db
      .select()
      .from(readingSamples)
      .where(eq(readingSamples.readingId, reading.id))
      .orderBy(asc(readingSamples.channel))
    expect(
      samples.map(({ channel, mean, effectiveCount, count }) => [channel, mean, effectiveCount, count]),
    ).toEqual([
      ['anodeVolts', 200, 4, 4],
      ['coilAmps', 1.5, 3, 3],
    ])
    expect([...unpackDoubles(samples[0]?.timesSeconds ?? new Uint8Array())]).toEqual(times)
    expect([...unpackDoubles(samples[1]?.values ?? new Uint8Array())]).toEqual([
      1.5,
      Number.NaN,
      1.5001,
      1.4999,
    ])
    // IEEE 754: 1.5 as a little-endian double ends in the bytes F8 3F.
    expect(
      Buffer.from(samples[1]?.values ?? [])
        .subarray(0, 8)
        .toString('hex'),
    ).toBe('000000000000f83f')
    const row = await site.db.query.readings.findFirst({ where: eq(readings.id, reading.id) })
    expect(row?.states.anodeVolts?.state).toBe('settled')
  })

  it('combines scatter, accuracy and last digit of the meter: 0.1 % + 2 × 0.01 V on 200 V (JCGM 100, 4.3.7 and F.2.2.1)', async () => {
    await take(site.student)
    const { uAnodeVolts, uCoilAmps } = await newest()
    expectNear(uAnodeVolts, Math.sqrt(0.01 ** 2 + 0.22 ** 2 / 3 + 0.01 ** 2 / 12), { rel: 1e-12 })
    expectNear(uCoilAmps, Math.sqrt(0.0001 ** 2 + 0.0033 ** 2 / 3 + 0.0001 ** 2 / 12), { rel: 1e-12 })
  })

  it('is numbered on in its run, also when two people capture at once', async () => {
    await Promise.all([take(site.student), take(site.partner)])
    await take(site.instructor)
    const { readings: all, run } = await view()
    expect(all.map(({ number }) => number)).toEqual([1, 2, 3])
    expect(run?.by).toBe('Kofi Adeyemi')
  })

  it('that the bridge refuses stores nothing and says why', async () => {
    const refusals = [{ code: 'not-settled', sentence: 'The coil current still drifts.' }]
    bridge.answer = () => ({ body: { accepted: false, refusals } })
    expect(await outcome(capture(args(site.student, {}, {})))).toEqual({
      status: 409,
      body: { ok: false, errors: {}, refusals },
    })
    expect((await view()).readings).toEqual([])
  })

  it.each([
    ['of another bench', { benchId: 'bench-2' }],
    ['with a channel shorter than its times', { samples: { anodeVolts: [200] } }],
    ['without a coil current', { statistics: { anodeVolts: settledWindow().statistics.anodeVolts } }],
    ['of a revision that is not stored here', { revision: 7 }],
  ] as [string, Partial<Capture>][])('%s is not stored', async (_, over) => {
    expect((await take(site.student, settledWindow(over))).status).toBe(503)
    expect((await view()).readings).toEqual([])
  })

  it('of a student of another class meets no bench, and the bridge is not asked', async () => {
    expect((await take(site.outsider)).status).toBe(404)
    expect(bridge.asked).toEqual([])
  })
})

describe('A run', () => {
  const at = (day: string) => new Date(`${day}T11:00:00`)
  const store = (day: string) =>
    storeCapture(site.db, { capture: settledWindow(), personId: site.student.id, now: at(day) })

  it('is begun by the first capture, goes on for the day, and is closed by the first capture of another day', async () => {
    await site.db.update(runs).set({ endedAt: new Date() })
    expect(await store('2026-10-05')).toBe(1)
    expect(await store('2026-10-05')).toBe(2)
    const first = (await view()).run
    expect(first?.startedAt).toBe(at('2026-10-05').toISOString())
    expect(await store('2026-10-06')).toBe(1)
    const second = (await view()).run
    expect(second?.startedAt).toBe(at('2026-10-06').toISOString())
    const closed = await site.db.query.runs.findFirst({ where: eq(runs.id, first?.id ?? '') })
    expect(closed?.endedAt).toEqual(at('2026-10-06'))
    expect(await site.db.$count(readings, eq(readings.runId, first?.id ?? ''))).toBe(2)
  })

  it('is begun anew on request, and the one before keeps its readings', async () => {
    await take(site.student)
    const before = (await view()).run?.id ?? ''
    await outcome(newRun(args(site.partner, {}, {})))
    const after = await view()
    expect(after.readings).toEqual([])
    expect(after.run).toMatchObject({ by: 'Runa Lindqvist' })
    expect(await site.db.$count(readings, eq(readings.runId, before))).toBe(1)
    expect((await outcome(newRun(args(site.outsider, {}, {})))).status).toBe(404)
    expect((await view()).run?.id).toBe(after.run?.id)
  })
})

describe('Edges', () => {
  beforeEach(() => take(site.student))

  it('in centimetres with either decimal mark are stored in metres and give e/m with its budget', async () => {
    const { id } = await newest()
    expect((await enter(site.student, id, '3,35', '11.15')).status).toBe(200)
    const { edges: entered, result } = await newest()
    expect(entered).toEqual([
      { personId: site.student.id, name: 'Kofi Adeyemi', leftMetres: 0.0335, rightMetres: 0.1115 },
    ])
    expectNear(result?.diameterMetres ?? 0, 0.078, { rel: 1e-12 })
    // 2V/(kIr)² with k = (4/5)^1.5 µ0·130/0.15 m, before the field's unevenness: 1.8013e11; the orbit of this gun sees less.
    const field = ((4 / 5) ** 1.5 * 1.25663706127e-6 * 130 * 1.5) / 0.15
    expectNear(result?.chargeToMass ?? 0, 400 / (field * 0.039) ** 2, { rel: 0.01 })
    expect(result?.groups.reduce((sum, { share }) => sum + share, 0)).toBeCloseTo(1, 9)
    expect(result?.coverageFactor).toBeGreaterThan(1.95)
    expectNear(
      result?.expandedUncertainty ?? 0,
      (result?.coverageFactor ?? 0) * (result?.standardUncertainty ?? 0),
      { rel: 1e-12 },
    )
  })

  it('belong to a sense of the current: reversed, the orbit of a gun off the axis is another', async () => {
    const e = async (polarity: 1 | -1, amps: number) => {
      const window = settledWindow({ polarity })
      const coilAmps = window.statistics.coilAmps && { ...window.statistics.coilAmps, mean: amps }
      await take(site.student, { ...window, statistics: { ...window.statistics, coilAmps } })
      await enter(site.student, (await newest()).id, '3.35', '11.15')
      return (await newest()).result?.chargeToMass ?? 0
    }
    // A meter behind the reversing relay shows the sign, one before it does not.
    expect(await e(-1, -1.5)).toBe(await e(-1, 1.5))
    const [straight, reversed] = [await e(1, 1.5), await e(-1, 1.5)]
    expect(Math.abs(reversed / straight - 1)).toBeGreaterThan(0.005)
  })

  it('of each person count once, the newest; a correction leaves the older row where it was', async () => {
    const { id } = await newest()
    await enter(site.student, id, '3.30', '11.20')
    await enter(site.partner, id, '3.40', '11.10')
    await enter(site.student, id, '3.35', '11.15')
    const { edges: entered, result } = await newest()
    expect(entered.map(({ name, leftMetres }) => [name, leftMetres])).toEqual([
      ['Runa Lindqvist', 0.034],
      ['Kofi Adeyemi', 0.0335],
    ])
    expectNear(result?.diameterMetres ?? 0, (0.078 + 0.077) / 2, { rel: 1e-12 })
    expect(await site.db.$count(edges, eq(edges.readingId, id))).toBe(3)
  })

  it('read by several people tell the spread for the whole run, but not where the reading is struck', async () => {
    const { id } = await newest()
    await enter(site.student, id, '3.35', '11.15')
    const alone = (await newest()).result
    await take(site.student)
    const second = (await newest()).id
    await enter(site.student, second, '3.30', '11.20')
    await enter(site.partner, second, '3.40', '11.10')
    const first = async () => (await view()).readings.find((reading) => reading.id === id)?.result
    const pooled = await first()
    // Distances of 79 and 77 mm: s = 2 mm/√2 with one degree of freedom. e/m goes as 1/d²: 2·u(d)/d of it is added.
    const added = (2 * (0.002 / Math.SQRT2)) / 0.078
    expectNear(
      ((pooled?.standardUncertainty ?? 0) ** 2 - (alone?.standardUncertainty ?? 0) ** 2) ** 0.5 /
        (alone?.chargeToMass ?? 1),
      added,
      { rel: 0.05 },
    )
    expect(pooled?.coverageFactor).toBeGreaterThan(5)
    await strikeOut(site.student, second, 'Knocked.')
    expect(await first()).toEqual(alone)
  })

  it.each([
    ['', '11', 'left', 'Type the left edge in centimetres.'],
    ['3', 'x', 'right', '“x” is not a number. Type the right edge in centimetres, as in 1.5 or 1,5.'],
    ['3 cm', '11', 'left', 'Type only the number of centimetres: “3 cm” has something behind it.'],
    ['-1', '11', 'left', 'The scale goes from 0 to 12 cm.'],
    ['3', '12.1', 'right', 'The scale goes from 0 to 12 cm.'],
    [
      '3',
      'Infinity',
      'right',
      '“Infinity” is not a number. Type the right edge in centimetres, as in 1.5 or 1,5.',
    ],
    ['11', '3', 'right', 'The right edge has to stand to the right of the left edge.'],
    ['5', '5', 'right', 'The right edge has to stand to the right of the left edge.'],
  ])('%j and %j are refused beside the field %s', async (left, right, field, error) => {
    const { id } = await newest()
    expect(await enter(site.student, id, left, right)).toEqual({
      status: 400,
      body: { ok: false, errors: { [field]: [error] }, refusals: [] },
    })
    expect(await site.db.$count(edges, eq(edges.readingId, id))).toBe(0)
  })

  it('that no orbit of this bench can have are kept, without a result', async () => {
    const { id } = await newest()
    await site.db
      .update(benchRevisions)
      .set({ config: sql`json_set(config, '$.scale.lengthMetres', 0.4)` })
      .where(eq(benchRevisions.benchId, 'bench-1'))
    try {
      expect((await enter(site.student, id, '1', '39')).status).toBe(200)
      expect((await newest()).result).toBeNull()
    } finally {
      await site.db
        .update(benchRevisions)
        .set({ config: demoBenches[0] })
        .where(eq(benchRevisions.benchId, 'bench-1'))
    }
  })

  it('of another class’s bench, or of a reading under another bench’s address, meet no reading', async () => {
    const { id } = await newest()
    expect((await enter(site.outsider, id, '3', '11')).status).toBe(404)
    expect((await enter(site.student, id, '3', '11', 'bench-2')).status).toBe(404)
    expect((await enter(site.student, 'none', '3', '11')).status).toBe(404)
    expect(await site.db.$count(edges, eq(edges.readingId, id))).toBe(0)
  })
})

describe('A later revision of the bench', () => {
  afterEach(() =>
    site.db.delete(benchRevisions).where(sql`${benchRevisions.benchId} = 'bench-1' and revision > 1`),
  )

  it('changes nothing in the readings taken before it', async () => {
    await take(site.student)
    const { id } = await newest()
    await enter(site.student, id, '3.35', '11.15')
    const before = (await newest()).result
    const [bench] = demoBenches
    if (!bench) throw new Error('There is no bench')
    const [coil] = bench.coilPair.coils
    const wound = { ...coil, turns: 150 }
    const config = {
      ...bench,
      revision: 2,
      coilPair: { ...bench.coilPair, coils: [wound, wound] as [typeof wound, typeof wound] },
    }
    await site.db.insert(benchRevisions).values({ benchId: 'bench-1', revision: 2, config })
    expect((await newest()).result).toEqual(before)

    await take(site.student, settledWindow({ revision: 2 }))
    const second = await newest()
    expect(second.revision).toBe(2)
    await enter(site.student, second.id, '3.35', '11.15')
    // η = 2V/(B²r² − V²/c²) with B ∝ N: the closed form (Lorentz force with relativistic momentum).
    const [volts, light] = [200, 299_792_458]
    const square = (2 * volts) / (before?.chargeToMass ?? 0) + (volts / light) ** 2
    expectNear(
      (await newest()).result?.chargeToMass ?? 0,
      (2 * volts) / (square * (150 / 130) ** 2 - (volts / light) ** 2),
      { rel: 1e-12 },
    )
  })
})

describe('Striking a reading', () => {
  beforeEach(() => take(site.student))

  it('keeps it, with the reason, who and when', async () => {
    const { id } = await newest()
    expect((await strikeOut(site.student, id, '  I read the inner edge.  ')).status).toBe(200)
    expect((await newest()).struck).toMatchObject({
      reason: 'I read the inner edge.',
      by: 'Kofi Adeyemi',
      at: expect.stringMatching(/^\d{4}-/),
    })
    expect((await enter(site.student, id, '3', '11')).status).toBe(409)
    expect((await strikeOut(site.instructor, id, 'Once more.')).status).toBe(409)
    expect((await newest()).struck?.reason).toBe('I read the inner edge.')
  })

  it.each(['', '  ', 'no', 'x'.repeat(301)])(
    'with the reason %j is refused beside the field',
    async (reason) => {
      const { id } = await newest()
      const { status, body } = await strikeOut(site.student, id, reason)
      expect(status).toBe(400)
      expect(Object.keys((body as { errors: object }).errors)).toEqual(['reason'])
      expect((await newest()).struck).toBeNull()
    },
  )

  it('is for its captor and for staff, not for a partner', async () => {
    const { id } = await newest()
    expect((await strikeOut(site.partner, id, 'Not mine.')).status).toBe(403)
    expect((await strikeOut(site.outsider, id, 'Not mine.')).status).toBe(404)
    expect((await strikeOut(site.technician, id, 'Not mine.', 'bench-2')).status).toBe(404)
    expect((await newest()).struck).toBeNull()
    expect((await strikeOut(site.technician, id, 'The meter was being changed.')).status).toBe(200)
  })
})
