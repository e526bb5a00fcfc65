import { eq } from 'drizzle-orm'
import { beforeAll, beforeEach, describe, expect, it, vi } from 'vitest'
import type { Person } from '#app/context.ts'
import { demoBenches, demoTypedBench } from '#app/db/demo-benches.ts'
import { benchRevisions, readings, relations, strikes } from '#app/db/schema.ts'
import { checkRelation } from '#app/relation/check.ts'
import { action, loader } from '#app/routes/benches/relation.tsx'
import type { RelationReply } from '#app/runs/relation-view.ts'
import { startRun } from '#app/runs/runs.server.ts'
import { chance, rightFormulas, symbols } from '#tests/relation/formulas.ts'
import { type ClassSite, openClassSite, outcome } from '#tests/support/class-site.ts'
import { formRequest, ownDatabaseUrl, routeArgs, routeContext } from '#tests/support/database.ts'
import { expectNear } from '#tests/support/near.ts'
import { spreadSettings, storeRun } from '#tests/support/stored-run.ts'

vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
let site: ClassSite

beforeAll(async () => {
  site = await openClassSite()
}, 60_000)
beforeEach(() => site.db.delete(relations))

const right = '8 V (5/4)³ R² / (μ₀ N I d)²'
const path = (benchId: string) => `/benches/${benchId}/relation`

async function check(
  person: Person,
  formula: string,
  over: Record<string, string> = {},
  benchId = 'bench-1',
) {
  const request = formRequest(path(benchId), { ...symbols, ...over, formula })
  const { status, body } = await outcome(
    action(routeArgs(request, routeContext(site.db, person), { benchId }) as never),
  )
  return { status, reply: body as RelationReply }
}

async function look(person: Person, benchId = 'bench-1') {
  const request = new Request(`http://127.0.0.1:3000${path(benchId)}`)
  const { view } = await loader(routeArgs(request, routeContext(site.db, person), { benchId }) as never)
  return view
}

describe('A formula that is checked', () => {
  it.each(rightFormulas)(
    'is stored when it holds, with who, when, its symbols and its draw: %s',
    async (text) => {
      const before = Date.now()
      const { status, reply } = await check(site.student, text)
      expect(status).toBe(200)
      expect(reply.check).toMatchObject({ holds: true, findings: [] })
      const [row, ...more] = await site.db.select().from(relations)
      expect(more).toEqual([])
      expect(row).toMatchObject({ personId: site.student.id, benchId: 'bench-1', text })
      expect(row?.symbols).toEqual({ ...symbols })
      expect(Math.abs((row?.checkedAt.getTime() ?? 0) - before)).toBeLessThan(10_000)
      expect(checkRelation({ text, symbols, random: chance(row?.seed ?? 0) }).holds).toBe(true)
    },
  )

  it.each([
    ['V (5/4)³ R² / (μ₀ N I d)²', 'factor'],
    ['2 V (5/4)³ R² / (μ₀ N I d)²', 'diameter-for-radius'],
    ['8 V (5/4)³ R² / (μ₀ I d)²', 'absent'],
    ['8 V R² / (μ₀ N I d)²', 'coil-factor-forgotten'],
    ['8 V (4/5)³ R² / (μ₀ N I d)²', 'coil-factor-inverted'],
    ['8 V (5/4)³ s² / (μ₀ N I d)²', 'separation-for-radius'],
    ['8 (5/4)³ R² / (V (μ₀ N I d)²)', 'wrong-side'],
    ['V/(R-R)', 'division-by-zero'],
    ['sqrt(-V)', 'root-of-negative'],
    ['9^9^9^9', 'not-finite'],
    ['R + V', 'unlike-sum'],
  ])('is not stored with a slip in it, which is named: %s', async (text, code) => {
    const { status, reply } = await check(site.student, text)
    expect(status).toBe(200)
    expect(reply.check?.findings.map((it) => it.code)).toContain(code)
    expect(await site.db.$count(relations)).toBe(0)
  })

  it.each([
    ['import("node:fs")'],
    ['V.constructor.constructor(R)'],
    ['__proto__'],
    ['('.repeat(390)],
    ['V + '.repeat(2500)],
    ['NaN'],
    ['1e999'],
    [''],
  ])('is refused when it is none, and comes back as it was typed: %s', async (text) => {
    const { status, reply } = await check(site.student, text)
    expect(status).toBe(400)
    expect(reply.check).toMatchObject({ readAs: null, holds: false })
    expect(reply.typed).toEqual({ text, symbols })
    expect(await site.db.$count(relations)).toBe(0)
  })

  it('is not looked at while a symbol is none', async () => {
    const { status, reply } = await check(site.student, right, { turns: '2N', coilRadius: 'V' })
    expect(status).toBe(400)
    expect(Object.keys(reply.errors)).toEqual(['turns', 'coilRadius'])
    expect(reply.check).toBeNull()
    expect(await site.db.$count(relations)).toBe(0)
  })

  it('is nobody’s who may not watch the bench', async () => {
    expect((await check(site.outsider, right)).status).toBe(404)
    expect(await site.db.$count(relations)).toBe(0)
  })
})

describe('A relation that held', () => {
  it('is its person’s own, the newest, at every bench of theirs', async () => {
    await check(site.partner, right)
    expect(await look(site.student)).toMatchObject({ relation: null, values: null })
    await check(site.student, right)
    await check(site.student, '2 V (R² + s²/4)³ / (μ0 N I R² r)²')
    expect((await look(site.student, 'bench-2')).relation).toMatchObject({
      readAs: '2·V·(R² + s² / 4)³ / (μ0·N·I·R²·r)²',
      isHelmholtz: false,
    })
  })

  it('gives a value for each reading that is read and not struck, by itself alone', async () => {
    await check(site.student, right)
    const runId = await storeRun(site.db, {
      personId: site.student.id,
      settings: spreadSettings.slice(0, 4),
    })
    const [first] = await site.db.select().from(readings).where(eq(readings.runId, runId))
    await site.db.insert(strikes).values({
      readingId: first?.id ?? '',
      personId: site.student.id,
      reason: 'Read badly.',
      struckAt: new Date(),
    })
    const { values, coils } = await look(site.student)
    expect(coils).toEqual({ turns: 130, radiusMetres: 0.15, separationMetres: 0.15 })
    expect(values?.map(({ number }) => number)).toEqual([2, 3, 4])
    for (const { anodeVolts, coilAmps, diameterMetres, own, logbook } of values ?? []) {
      // B = (4/5)^(3/2) μ₀NI/R and e/m = 2V/(Br)², worked out here.
      const tesla = (0.8 ** 1.5 * 1.25663706127e-6 * 130 * coilAmps) / 0.15
      expectNear(own ?? 0, (2 * anodeVolts) / (tesla * (diameterMetres / 2)) ** 2, { rel: 1e-9 })
      expectNear(own ?? 0, logbook?.value ?? 0, { rel: 0.06 })
    }
    // The same by the field of any separation: these coils are as far apart as their radius.
    await check(site.student, '2 V (R² + s²/4)³ / (μ0 N I R² r)²')
    const again = await look(site.student)
    again.values?.forEach(({ own }, i) => {
      expectNear(own ?? 0, values?.[i]?.own ?? 0, { rel: 1e-9 })
    })
  })

  it('takes half of the current where the coils are parallel', async () => {
    await check(site.student, right)
    await storeRun(site.db, { personId: site.student.id, settings: spreadSettings.slice(0, 1) })
    const inSeries = (await look(site.student)).values?.[0]
    const config = demoBenches[0]
    if (!config) throw new Error('The demo has no bench')
    const revision = { ...config, revision: 2, coilConnection: 'parallel' as const }
    await site.db.insert(benchRevisions).values({ benchId: 'bench-1', revision: 2, config: revision })
    const inParallel = (await look(site.student)).values?.[0]
    await site.db.delete(benchRevisions).where(eq(benchRevisions.revision, 2))
    expectNear(inParallel?.coilAmps ?? 0, (inSeries?.coilAmps ?? 0) / 2, { rel: 1e-12 })
    expectNear(inParallel?.own ?? 0, 4 * (inSeries?.own ?? 0), { rel: 1e-9 })
  })

  it('has no values where no run is open, or no beam is read', async () => {
    await check(site.technician, right)
    expect((await look(site.technician, demoTypedBench.benchId)).values).toBeNull()
    await startRun(site.db, { benchId: 'bench-2', personId: site.student.id })
    expect((await look(site.technician, 'bench-2')).values).toEqual([])
  })

  it('and its check tell nobody the accepted value', async () => {
    const near = await check(site.student, '1.758820 · 10^11 · V/V')
    const far = await check(site.student, '1.2 · 10^11 · V/V')
    expect(near.reply.check?.findings.length).toBeGreaterThan(0)
    expect(near.reply.check?.findings).toEqual(far.reply.check?.findings)
    await check(site.student, right)
    expect(JSON.stringify(await look(site.student))).not.toMatch(/1\.7588|175882|accepted/)
  })
})
