import { beforeAll, describe, expect, it, vi } from 'vitest'
import type { Person } from '#app/context.ts'
import { loader } from '#app/routes/benches/planner.tsx'
import { startRun } from '#app/runs/runs.server.ts'
import { type ClassSite, openClassSite } from '#tests/support/class-site.ts'
import { ownDatabaseUrl, routeArgs, routeContext } from '#tests/support/database.ts'
import { spreadSettings, storeRun } from '#tests/support/stored-run.ts'

vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
let site: ClassSite

beforeAll(async () => {
  site = await openClassSite()
}, 60_000)

async function plan(person: Person, query = '') {
  const request = new Request(`http://127.0.0.1:3000/benches/bench-1/planner${query}`)
  const { view } = await loader(
    routeArgs(request, routeContext(site.db, person), { benchId: 'bench-1' }) as never,
  )
  return view
}

describe('The planner of a bench', () => {
  it('predicts nothing for a student whose run states no value, and for another run than theirs', async () => {
    await startRun(site.db, { benchId: 'bench-1', personId: site.student.id })
    expect(await plan(site.student)).toMatchObject({ valueFrom: null, map: null, chosen: [] })
    await storeRun(site.db, { personId: site.partner.id, settings: spreadSettings.slice(0, 4) })
    expect((await plan(site.student)).map).toBeNull()
  })

  it('predicts for a student with the value that their run states', async () => {
    await storeRun(site.db, { personId: site.student.id, settings: spreadSettings.slice(0, 4) })
    const view = await plan(site.student, '?count=6')
    expect(view.valueFrom).toBe('run')
    expect(view.chosen.reduce((sum, { times }) => sum + times, 0)).toBe(6)
    const cells = view.map?.flatMap(({ rows }) => rows.flatMap((row) => row.cells)) ?? []
    expect(cells.filter(({ times }) => times > 0).every(({ refused }) => refused === null)).toBe(true)
    // Bench 1 has its glass at 8 cm from the axis: some settings touch it, and some are well inside.
    expect(new Set(cells.map(({ refused }) => refused))).toEqual(new Set([null, 'glass']))
    expect(JSON.stringify(view)).not.toMatch(/1\.7588|175882/)
  })

  it('predicts for staff with the accepted value, and says what the plan would know of each effect', async () => {
    const view = await plan(site.technician, '?count=10&criterion=charge-to-mass')
    expect(view.valueFrom).toBe('accepted')
    expect(view.outlook?.relativeUncertainty).toBeLessThan(0.05)
    expect(view.outlook?.effects).toHaveLength(3)
    for (const { told } of view.outlook?.effects ?? []) {
      expect(told).toBeGreaterThanOrEqual(0)
      expect(told).toBeLessThan(1)
    }
  })
})
