import { beforeAll, describe, expect, it, vi } from 'vitest'
import type { Person } from '#app/context.ts'
import { acceptedChargeToMass } from '#app/physics/accepted-value.ts'
import { loader } from '#app/routes/runs/analysis.tsx'
import { action as planAction } from '#app/routes/runs/plan.ts'
import { action as statementAction } from '#app/routes/runs/statement.ts'
import { strikeReading } from '#app/runs/strike.server.ts'
import { type ClassSite, openClassSite, outcome } from '#tests/support/class-site.ts'
import { formRequest, ownDatabaseUrl, routeArgs, routeContext } from '#tests/support/database.ts'
import { expectNear } from '#tests/support/near.ts'
import { importClass } from '#tests/support/send-import.ts'
import { spreadSettings, storeRun } from '#tests/support/stored-run.ts'

vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
let site: ClassSite

beforeAll(async () => {
  site = await openClassSite()
}, 60_000)

async function analyse(runId: string, person: Person, query = '') {
  const request = new Request(`http://127.0.0.1:3000/runs/${runId}/analysis${query}`)
  const { view } = await loader(routeArgs(request, routeContext(site.db, person), { runId }) as never)
  return view
}

const send = (
  action: typeof planAction | typeof statementAction,
  runId: string,
  person: Person,
  fields: Record<string, string>,
) =>
  outcome(
    action(
      routeArgs(formRequest(`/runs/${runId}`, fields), routeContext(site.db, person), { runId }) as never,
    ) as Promise<unknown>,
  )

describe('The analysis of a run', () => {
  it('states e/m by the general model, within its uncertainty of the constant that the readings were made with', async () => {
    const runId = await storeRun(site.db, { personId: site.student.id, settings: spreadSettings })
    const view = await analyse(runId, site.student)
    expect(view.rows).toHaveLength(12)
    expect(view.fits).toHaveLength(9)
    expect(view.stated?.fit).toBe('general')
    const { value = 0, expandedUncertainty = 0, standardUncertainty = 0 } = view.stated ?? {}
    expect(Math.abs(value - acceptedChargeToMass.value)).toBeLessThan(expandedUncertainty)
    expect(expandedUncertainty / value).toBeLessThan(0.05)
    // The budget shows what the statement claims.
    const relative = Math.hypot(...view.budget.map((row) => row.relative))
    expectNear(relative, standardUncertainty / value, { rel: 1e-6 })
    expectNear(
      view.budget.reduce((sum, row) => sum + row.share, 0),
      1,
      { rel: 1e-9 },
    )
    expect(view.diagnosis?.finding.join(' ')).toMatch(/agree with one value of e\/m/)
  })

  it('finds a stray field that was put in, with its size', async () => {
    const truth = { strayFieldTesla: 60e-6 }
    const runId = await storeRun(site.db, {
      personId: site.student.id,
      settings: [...spreadSettings, ...spreadSettings],
      truth,
      edgeMetres: 0.1e-3,
    })
    const { diagnosis } = await analyse(runId, site.student)
    const stray = diagnosis?.effects.find(({ name }) => name.startsWith('stray field'))
    expectNear(stray?.value ?? 0, 60, { abs: 3 * (stray?.standardUncertainty ?? 0) })
    expect(diagnosis?.finding.join(' ')).toMatch(/do not agree with one value/)
    expect(diagnosis?.unseen.join(' ')).toMatch(/constant percentage/)
  })

  it('proposes further settings inside the limits, which go into the plan with one press, and out again', async () => {
    const runId = await storeRun(site.db, { personId: site.student.id, settings: spreadSettings.slice(3, 8) })
    const { diagnosis } = await analyse(runId, site.student)
    const further = diagnosis?.further ?? []
    expect(further.length).toBeGreaterThan(0)
    for (const { anodeVolts, coilAmps } of further) {
      expect(anodeVolts).toBeLessThanOrEqual(300)
      expect(coilAmps).toBeLessThanOrEqual(2)
    }
    const [first] = further
    const added = await send(planAction, runId, site.student, {
      intent: 'add',
      anodeVolts: String(first?.anodeVolts),
      coilAmps: String(first?.coilAmps),
      polarity: String(first?.polarity),
    })
    expect(added.status).toBe(200)
    const { plan } = await analyse(runId, site.student)
    expect(plan).toMatchObject([{ anodeVolts: first?.anodeVolts, isRead: false }])
    await send(planAction, runId, site.student, { intent: 'remove', settingId: plan[0]?.id ?? '' })
    expect((await analyse(runId, site.student)).plan).toEqual([])
  })

  it('refuses a planned setting beyond the limits, with the limit', async () => {
    const runId = await storeRun(site.db, { personId: site.student.id, settings: spreadSettings.slice(0, 3) })
    const { status, body } = await send(planAction, runId, site.student, {
      anodeVolts: '400',
      coilAmps: '1',
      polarity: '1',
    })
    expect(status).toBe(400)
    expect(JSON.stringify(body)).toContain('limit of 300 V')
  })

  it('states the result by another fit when the student says so', async () => {
    const runId = await storeRun(site.db, { personId: site.student.id, settings: spreadSettings })
    expect((await send(statementAction, runId, site.student, { fit: 'origin:weighted' })).status).toBe(200)
    const view = await analyse(runId, site.student)
    const row = view.fits.find(({ fit }) => fit === 'origin:weighted')
    expect(view.stated?.value).toBe(row?.chargeToMass.value)
    expect((await send(statementAction, runId, site.student, { fit: 'none' })).status).toBe(400)
  })

  it('draws the line that is asked for', async () => {
    const runId = await storeRun(site.db, { personId: site.student.id, settings: spreadSettings })
    const { plot } = await analyse(runId, site.student, '?line=root&method=ordinary')
    expect(plot).toMatchObject({ line: 'root', method: 'ordinary' })
    expect(plot?.points).toHaveLength(12)
  })

  it('is reduced with a sentence for no reading, one reading, and none left', async () => {
    const none = await analyse(
      await storeRun(site.db, { personId: site.student.id, settings: [] }),
      site.student,
    )
    expect(none.stated).toBeNull()
    expect(none.reductions).toEqual(['There are no readings in this run yet.'])

    const runId = await storeRun(site.db, { personId: site.student.id, settings: spreadSettings.slice(0, 1) })
    const one = await analyse(runId, site.student)
    expect(one.stated?.value).toBeGreaterThan(0)
    expect(one.reductions.join(' ')).toMatch(/fewer than three readings/)

    const form = new FormData()
    form.set('reason', 'Wrong bench.')
    const [reading] = one.rows
    await strikeReading(site.db, {
      benchId: 'bench-1',
      readingId: reading?.id ?? '',
      person: site.technician,
      form,
    })
    const left = await analyse(runId, site.student)
    expect(left.stated).toBeNull()
    expect(left.reductions.join(' ')).toMatch(/None of the 1 readings can be used: struck: Wrong bench\./)
  })

  it('shows the deviation from the accepted value to staff alone', async () => {
    const runId = await storeRun(site.db, { personId: site.student.id, settings: spreadSettings })
    expect((await analyse(runId, site.instructor)).comparison?.sentence).toMatch(
      /% (above|below) the accepted value/,
    )
    const view = await analyse(runId, site.student)
    expect(view.comparison).toBeNull()
    expect(JSON.stringify(view)).not.toMatch(/accepted value|CODATA|1\.7588|175882/)
  })

  it('of the class readings, imported, states no value and says why, and staff see how far off their mean is', async () => {
    const runId = await importClass(site.db, site.student)
    const view = await analyse(runId, site.student)
    expect(view.stated).toBeNull()
    expectNear(view.mean?.value ?? 0, 1.2e11, { rel: 1e-3 })
    expect(view.comparison).toBeNull()
    const said = view.diagnosis?.finding.join(' ')
    expect(said).toContain('No single line fits the readings: χ² is 106 on 23.')
    expect(said).toMatch(/far too large: .*−240 ± 47 µT, .*73\.3 ± 4\.9 V, .*−48\.4 ± 6\.3 mm/)
    expect(view.diagnosis?.checks.length).toBeGreaterThan(3)
    expect((await analyse(runId, site.instructor)).comparison?.sentence).toContain(
      '32 % below the accepted value',
    )
  })

  it('is not found by a student who took no part', async () => {
    const runId = await storeRun(site.db, { personId: site.student.id, settings: spreadSettings.slice(0, 2) })
    await expect(analyse(runId, site.partner)).rejects.toMatchObject({ init: { status: 404 } })
    await expect(analyse(runId, site.outsider)).rejects.toMatchObject({ init: { status: 404 } })
  })
})
