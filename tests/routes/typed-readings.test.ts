import { eq, sql } from 'drizzle-orm'
import { afterAll, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest'
import { acknowledgeCautions } from '#app/benches/acknowledgements.server.ts'
import { findBenchLog } from '#app/benches/bench-log.server.ts'
import { loadBenchView, type ReadingView, type TypedBenchView } from '#app/benches/bench-view.server.ts'
import type { Person } from '#app/context.ts'
import { demoTypedBench } from '#app/db/demo-benches.ts'
import { benchRevisions, checklists, readingSamples, readings, runs } from '#app/db/schema.ts'
import type { TypedBench } from '#app/protocol/bench-config.ts'
import { action as ticket } from '#app/routes/api/tickets.ts'
import { action as tick } from '#app/routes/benches/checklist.ts'
import { action as command } from '#app/routes/benches/commands.ts'
import { action as enterEdges } from '#app/routes/benches/edges.ts'
import { action as capture } from '#app/routes/benches/readings.ts'
import { action as newRun } from '#app/routes/benches/runs.ts'
import { action as type } from '#app/routes/benches/typed-readings.ts'
import { loadAnalysis } from '#app/runs/analysis.server.ts'
import { typeReading } from '#app/runs/typed.server.ts'
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

/** Each test finds an empty bench, and a student who has acknowledged the cautions. */
beforeEach(async () => {
  for (const table of ['edges', 'rungs', 'checklists', 'readings', 'runs', 'acknowledgements'])
    await site.db.run(sql.raw(`delete from ${table}`))
  await acknowledgeCautions(site.db, { personId: site.student.id })
  bridge.asked.length = 0
})

type Fields = Record<string, string>
const contacts = demoTypedBench.checklist.map(({ contact }) => contact)
const args = (person: Person, fields: Fields, params: Fields = {}) =>
  routeArgs(formRequest('/benches/bench-4', fields), routeContext(site.db, person), {
    benchId: 'bench-4',
    ...params,
  }) as never

function tickAll(person: Person, { ticked = contacts, benchId = 'bench-4' } = {}) {
  const body = new URLSearchParams(ticked.map((contact) => ['contact', contact]))
  const request = new Request('http://127.0.0.1:3000/benches/bench-4/checklist', { method: 'POST', body })
  return outcome(tick(routeArgs(request, routeContext(site.db, person), { benchId }) as never))
}
const typeIn = (person: Person, fields: Fields, benchId = 'bench-4') =>
  outcome(type(args(person, fields, { benchId })))
const enter = (person: Person, readingId: string, fields: Fields) =>
  outcome(enterEdges(args(person, fields, { readingId })))

const view = async (person: Person = site.student) =>
  (await loadBenchView(site.db, { benchId: 'bench-4', person })) as TypedBenchView
async function newest(): Promise<ReadingView> {
  const reading = (await view()).readings.at(-1)
  if (!reading) throw new Error('There is no reading')
  return reading
}
const codesOf = (body: unknown) =>
  (body as { refusals?: { code: string }[] }).refusals?.map(({ code }) => code) ?? []
const errorsOf = (body: unknown) => (body as { errors: Record<string, string[]> }).errors

/** The bench with other data for a while, as its only revision. */
async function withBench(changes: Partial<TypedBench>, work: () => Promise<void>) {
  const set = (config: TypedBench) =>
    site.db.update(benchRevisions).set({ config }).where(eq(benchRevisions.benchId, 'bench-4'))
  await set({ ...demoTypedBench, ...changes })
  try {
    await work()
  } finally {
    await set(demoTypedBench)
  }
}

describe('The checklist of a bench without ports', () => {
  it('is noted for the run with who, when and the words of each contact, and begins the run of the day', async () => {
    expect((await tickAll(site.student)).status).toBe(200)
    const { ticked, run } = await view()
    expect(ticked).toEqual([
      { personId: site.student.id, name: 'Kofi Adeyemi', at: expect.stringMatching(/^\d{4}-/) },
    ])
    expect(run?.by).toBe('Kofi Adeyemi')
    const [row] = await site.db.select().from(checklists)
    expect(row).toMatchObject({ runId: run?.id, revision: 1, contacts: demoTypedBench.checklist })
  })

  it('stands in the log for its person and for staff', async () => {
    await tickAll(site.student)
    const log = (reader: Person) => findBenchLog(site.db, { benchId: 'bench-4', reader, limit: 10 })
    for (const reader of [site.student, site.technician])
      expect((await log(reader)).map(({ kind, personName }) => [kind, personName])).toEqual([
        ['checklist', 'Kofi Adeyemi'],
      ])
    expect(await log(site.partner)).toEqual([])
  })

  it('names what is not ticked, and stores nothing then', async () => {
    const { status, body } = await tickAll(site.student, { ticked: contacts.slice(1, -1) })
    expect(status).toBe(400)
    expect(errorsOf(body)).toEqual({ contact: ['Not ticked: leads, person.'] })
    expect([await site.db.$count(checklists), await site.db.$count(runs)]).toEqual([0, 0])
  })

  it('waits for the cautions', async () => {
    const { status, body } = await tickAll(site.partner)
    expect([status, ...codesOf(body)]).toEqual([409, 'cautions-open'])
    expect(await site.db.$count(checklists)).toBe(0)
  })
})

describe('A typed reading', () => {
  const meters = { volts: '200.4', amps: '1,520' }

  it('is stored as typed, with the size of each last digit, without samples and without asking the bridge', async () => {
    await tickAll(site.student)
    expect(await typeIn(site.student, meters)).toEqual({
      status: 200,
      body: { ok: true, answer: 'Entered as reading 1. Now read both edges.' },
    })
    const [row] = await site.db.select().from(readings)
    expect(row).toMatchObject({
      source: 'typed',
      number: 1,
      benchId: 'bench-4',
      revision: 1,
      personId: site.student.id,
      polarity: 1,
      anodeVolts: 200.4,
      anodeDigitVolts: 0.1,
      coilAmps: 1.52,
      coilDigitAmps: 0.001,
      uAnodeVolts: 0,
      windowSeconds: 0,
    })
    expect(await site.db.$count(readingSamples)).toBe(0)
    expect(bridge.asked).toEqual([])
    expect((await newest()).source).toBe('typed')
  })

  it('is known to half its last digit besides the meter’s accuracy (JCGM 100:2008, 4.3.7 and F.2.2.1)', async () => {
    await tickAll(site.student)
    await typeIn(site.student, { volts: '200', amps: '1.52' })
    const { uAnodeVolts, uCoilAmps } = await newest()
    // ±(0.5 % + 1 × 0.1 V) and a last digit of 1 V; ±(0.8 % + 1 × 0.01 A) and one of 0.01 A.
    expectNear(uAnodeVolts, Math.sqrt(1.1 ** 2 / 3 + 1 / 12), { rel: 1e-12 })
    expectNear(uCoilAmps, Math.sqrt((0.008 * 1.52 + 0.01) ** 2 / 3 + 0.01 ** 2 / 12), { rel: 1e-12 })
  })

  it('has e/m from its edges with the parallax of the ruler taken out, as any reading', async () => {
    await tickAll(site.student)
    await typeIn(site.student, { volts: '200.4', amps: '1.52' })
    expect((await enter(site.student, (await newest()).id, { left: '2.4', right: '11.9' })).status).toBe(200)
    const { result } = await newest()
    // d = 9.5 cm (L − δ)/L with L = 0.6 m and δ = 0.085 m.
    const diameter = (0.095 * 0.515) / 0.6
    expectNear(result?.diameterMetres ?? 0, diameter, { rel: 1e-12 })
    // 2V/(kIr)² with k = (4/5)^1.5 µ0·140/0.16 m; the unevenness of the field takes less than 1 % here.
    const field = ((4 / 5) ** 1.5 * 1.25663706127e-6 * 140 * 1.52) / 0.16
    expectNear(result?.chargeToMass ?? 0, 400.8 / ((field * diameter) / 2) ** 2, { rel: 0.01 })
    expect(result?.groups.reduce((sum, { share }) => sum + share, 0)).toBeCloseTo(1, 9)
  })

  it('needs the cautions, and the checklist ticked by this person', async () => {
    expect(codesOf((await typeIn(site.partner, meters)).body)).toEqual(['cautions-open'])
    expect(codesOf((await typeIn(site.student, meters)).body)).toEqual(['checklist-open'])
    expect(await site.db.$count(runs)).toBe(0)
    await tickAll(site.student)
    await acknowledgeCautions(site.db, { personId: site.partner.id })
    expect(codesOf((await typeIn(site.partner, meters)).body)).toEqual(['checklist-open'])
    await tickAll(site.partner)
    expect((await typeIn(site.partner, meters)).status).toBe(200)
    expect((await typeIn(site.student, meters)).status).toBe(200)
    expect((await view()).readings.map(({ number, by }) => [number, by])).toEqual([
      [1, 'Runa Lindqvist'],
      [2, 'Kofi Adeyemi'],
    ])
  })

  it('needs the checklist again in a new run, on a new day, and when the bench has changed', async () => {
    const form = new FormData()
    for (const [name, value] of Object.entries(meters)) form.set(name, value)
    await tickAll(site.student)
    await outcome(newRun(args(site.student, {})))
    expect(codesOf((await typeIn(site.student, meters)).body)).toEqual(['checklist-open'])
    await tickAll(site.student)
    const now = new Date(Date.now() + 36 * 3600_000)
    await acknowledgeCautions(site.db, { personId: site.student.id, now })
    const tomorrow = await typeReading(site.db, { benchId: 'bench-4', person: site.student, form, now })
    expect(codesOf(tomorrow.reply)).toEqual(['checklist-open'])
    await withBench({ revision: 2 }, async () => {
      expect(codesOf((await typeIn(site.student, meters)).body)).toEqual(['checklist-open'])
    })
    expect((await typeIn(site.student, meters)).status).toBe(200)
  })

  it.each<[Fields, string, RegExp]>([
    [{ volts: '', amps: '1.5' }, 'volts', /^Type the anode voltage in volts\.$/],
    [{ volts: '200 V', amps: '1.5' }, 'volts', /something behind it/],
    [{ volts: '0', amps: '1.5' }, 'volts', /above 0 and at most the bench's limit of 280 V/],
    [{ volts: '2004', amps: '1.5' }, 'volts', /limit of 280 V\. Read the meter again/],
    [{ volts: '200', amps: '-1.5' }, 'amps', /without a sign/],
    [{ volts: '200', amps: '2.1' }, 'amps', /limit of 2 A/],
    [{ volts: '200', amps: 'NaN' }, 'amps', /not a number/],
    [{ volts: '200', amps: '1.5', polarity: '-1' }, 'polarity', /one sense/],
  ])('of %j is refused beside the field %s', async (fields, name, words) => {
    await tickAll(site.student)
    const { status, body } = await typeIn(site.student, fields)
    expect(status).toBe(400)
    expect(Object.keys(errorsOf(body))).toEqual([name])
    expect(errorsOf(body)[name]?.[0]).toMatch(words)
    expect(await site.db.$count(readings)).toBe(0)
  })

  it('has the sense that is chosen, where the bench allows both', async () => {
    await withBench({ reversal: 'coils-only' }, async () => {
      await tickAll(site.student)
      expect((await typeIn(site.student, { ...meters, polarity: '-1' })).status).toBe(200)
      expect((await newest()).polarity).toBe(-1)
    })
  })

  it('is for those who may watch the bench', async () => {
    await acknowledgeCautions(site.db, { personId: site.outsider.id })
    expect((await tickAll(site.outsider)).status).toBe(404)
    expect((await typeIn(site.outsider, meters)).status).toBe(404)
  })
})

describe('A bench with ports', () => {
  it('takes no typed reading and no checklist', async () => {
    const typed = await typeIn(site.student, { volts: '200', amps: '1.5' }, 'bench-1')
    expect([typed.status, ...codesOf(typed.body)]).toEqual([409, 'has-instruments'])
    expect(codesOf((await tickAll(site.student, { benchId: 'bench-1' })).body)).toEqual(['has-instruments'])
    expect([await site.db.$count(readings), await site.db.$count(runs)]).toEqual([0, 0])
  })
})

describe('A bench without ports', () => {
  it('captures nothing and is commanded nothing: the bridge is not asked', async () => {
    const captured = await outcome(capture(args(site.student, {})))
    expect([captured.status, ...codesOf(captured.body)]).toEqual([409, 'no-instruments'])
    for (const kind of ['take-controls', 'make-safe', 'switch-heater']) {
      const commanded = await outcome(command(args(site.technician, { kind, on: 'true' })))
      expect([commanded.status, ...codesOf(commanded.body)], kind).toEqual([409, 'no-instruments'])
    }
    expect(bridge.asked).toEqual([])
  })

  it('has no ticket: the bridge does not know it', async () => {
    expect((await outcome(ticket(args(site.technician, { benchId: 'bench-4' })))).status).toBe(404)
  })
})

describe('A bench with rungs', () => {
  const rungs: TypedBench['scale'] = {
    kind: 'rungs',
    rungs: [
      { name: '6 cm', distanceMetres: 0.06 },
      { name: '8 cm', distanceMetres: 0.08 },
    ],
    uDistanceMetres: 0.0002,
  }
  const onRungs = (work: (readingId: string) => Promise<void>) =>
    withBench({ scale: rungs }, async () => {
      await tickAll(site.student)
      await typeIn(site.student, { volts: '200.4', amps: '1.52' })
      await work((await newest()).id)
    })

  it('has the diameter from the rung and the uncertainty of the setting in the current', () =>
    onRungs(async (id) => {
      const answer = await enter(site.student, id, { rung: '8 cm', halfWidth: '0,02' })
      expect(answer).toMatchObject({ status: 200, body: { answer: 'The rung of reading 1 is entered.' } })
      const { rung, result, edges } = await newest()
      expect(rung).toMatchObject({
        rung: '8 cm',
        name: 'Kofi Adeyemi',
        diameterMetres: 0.08,
        settingHalfWidthAmps: 0.02,
      })
      expect(edges).toEqual([])
      expect(result?.diameterMetres).toBe(0.08)
      await enter(site.student, id, { rung: '8 cm', halfWidth: '' })
      const sharp = (await newest()).result
      // e/m goes as 1/I²: the setting adds 2·(0.02 A/√3)/I of it, rectangular (JCGM 100:2008, 4.3.7).
      const added = (2 * 0.02) / Math.sqrt(3) / 1.52
      const [wide, narrow] = [result?.standardUncertainty ?? 0, sharp?.standardUncertainty ?? 0]
      expectNear(Math.sqrt(wide ** 2 - narrow ** 2) / (sharp?.chargeToMass ?? 1), added, { rel: 1e-3 })
    }))

  it('counts the newest rung of anyone, since one beam meets one rung', () =>
    onRungs(async (id) => {
      await enter(site.student, id, { rung: '6 cm', halfWidth: '' })
      await enter(site.partner, id, { rung: '8 cm', halfWidth: '0.01' })
      expect((await newest()).rung).toMatchObject({ rung: '8 cm', name: 'Runa Lindqvist' })
    }))

  it('can be analysed as a series, with what is its own in the current', () =>
    withBench({ scale: rungs }, async () => {
      await tickAll(site.student)
      for (const [volts, amps, rung] of [
        ['160', '1.36', '8 cm'],
        ['160', '1.81', '6 cm'],
        ['200', '1.52', '8 cm'],
        ['240', '1.66', '8 cm'],
      ] as const) {
        await typeIn(site.student, { volts, amps })
        await enter(site.student, (await newest()).id, { rung, halfWidth: '0.01' })
      }
      const runId = (await view()).run?.id ?? ''
      const asked = { runId, line: 'intercept', method: 'both-errors' } as const
      const analysis = await loadAnalysis(site.db, { ...asked, person: site.student })
      expect(analysis.rows.map(({ leftOut }) => leftOut)).toEqual([null, null, null, null])
      expect(analysis.stated?.standardUncertainty).toBeGreaterThan(0)
      expect(analysis.budget.map(({ name }) => name)).toContain('distance of the rungs from the gun')
      // Who only noted a rung took part in the run.
      await expect(loadAnalysis(site.db, { ...asked, person: site.partner })).rejects.toMatchObject({
        init: { status: 404 },
      })
      await enter(site.partner, (await newest()).id, { rung: '8 cm', halfWidth: '' })
      expect((await loadAnalysis(site.db, { ...asked, person: site.partner })).rows).toHaveLength(4)
    }))

  it.each<[Fields, string]>([
    [{ rung: '7 cm', halfWidth: '' }, 'rung'],
    [{ halfWidth: '0.01' }, 'rung'],
    [{ left: '1', right: '9' }, 'rung'],
    [{ rung: '6 cm', halfWidth: '-0.01' }, 'halfWidth'],
    [{ rung: '6 cm', halfWidth: '0.01 A' }, 'halfWidth'],
    [{ rung: '6 cm', halfWidth: '1.2' }, 'halfWidth'],
  ])('refuses %j beside the field %s', (fields, name) =>
    onRungs(async (id) => {
      const { status, body } = await enter(site.student, id, fields)
      expect([status, Object.keys(errorsOf(body))]).toEqual([400, [name]])
      expect((await newest()).rung).toBeNull()
    }),
  )
})

describe('A bench with a measured field factor', () => {
  const teslaPerAmp = 7.9e-4

  it('has it in place of the geometry in the budget', () =>
    withBench({ fieldFactor: { teslaPerAmp, standardUncertainty: 4e-5 } }, async () => {
      await tickAll(site.student)
      await typeIn(site.student, { volts: '200.4', amps: '1.52' })
      await enter(site.student, (await newest()).id, { left: '2.4', right: '11.9' })
      const { result } = await newest()
      const share = result?.groups.find(({ name }) => name === 'coil pair')?.share ?? 0
      const relative = (result?.standardUncertainty ?? 0) / (result?.chargeToMass ?? 1)
      // e/m goes as 1/k².
      expectNear(share * relative ** 2, ((2 * 4e-5) / teslaPerAmp) ** 2, { rel: 1e-3 })
    }))
})
