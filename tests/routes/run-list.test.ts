import { eq } from 'drizzle-orm'
import { beforeAll, beforeEach, describe, expect, it, vi } from 'vitest'
import type { Person } from '#app/context.ts'
import { readings, runs } from '#app/db/schema.ts'
import { loadImportedRun } from '#app/imports/imported-run.server.ts'
import { loader as imported, action as importedAction } from '#app/routes/runs/imported.tsx'
import { loader as runList } from '#app/routes/runs/runs.tsx'
import { storeCapture } from '#app/runs/capture.server.ts'
import { addPlanned } from '#app/runs/plan.server.ts'
import { bareCapture } from '#tests/support/bare-capture.ts'
import { type ClassSite, openClassSite, outcome } from '#tests/support/class-site.ts'
import { formRequest, ownDatabaseUrl, routeArgs, routeContext } from '#tests/support/database.ts'
import { clearRuns, importClass, sendImport } from '#tests/support/send-import.ts'

let site: ClassSite
beforeAll(async () => {
  vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
  site = await openClassSite()
})
beforeEach(() => clearRuns(site.db))

describe('An imported run', () => {
  const show = (person: Person, runId: string) =>
    outcome(
      Promise.resolve(
        imported(routeArgs(formRequest('/', {}), routeContext(site.db, person), { runId }) as never),
      ),
    )
  const strike = async (person: Person, runId: string, reason: string) => {
    const [reading] = await site.db.select().from(readings).where(eq(readings.runId, runId))
    const request = formRequest(`/runs/${runId}/imported`, { readingId: reading?.id ?? '', reason })
    return outcome(importedAction(routeArgs(request, routeContext(site.db, person), { runId }) as never))
  }

  it('is for whose it is and for staff; others of the class meet none', async () => {
    const runId = await importClass(site.db, site.student)
    expect((await show(site.student, runId)).status).toBe(200)
    expect((await show(site.technician, runId)).status).toBe(200)
    expect((await show(site.partner, runId)).status).toBe(404)
    expect((await show(site.outsider, runId)).status).toBe(404)
  })

  it('has readings that its owner and staff may strike, with a reason', async () => {
    const runId = await importClass(site.db, site.student)
    expect((await strike(site.partner, runId, 'Not mine.')).status).toBe(404)
    expect((await strike(site.student, runId, '')).status).toBe(400)
    expect((await strike(site.student, runId, 'Typed wrongly.')).status).toBe(200)
    expect((await strike(site.student, runId, 'Once more.')).status).toBe(409)
    const { readings: rows } = await loadImportedRun(site.db, { runId, person: site.student })
    expect(rows.filter(({ struck }) => struck).map(({ struck }) => struck?.reason)).toEqual([
      'Typed wrongly.',
    ])
  })

  it('uses a bench that its owner may watch: another class’s is a 404, and nothing is stored', async () => {
    const file = { name: 'readings.csv', text: 'V,I,d (cm)\n200,1.5,8.1\n' }
    const { status } = await sendImport(site.db, site.outsider, file, { bench: 'bench-1', intent: 'store' })
    expect(status).toBe(404)
    expect(await site.db.$count(runs)).toBe(0)
    expect(await importClass(site.db, site.outsider)).not.toBe('')
  })

  it('cannot be planned for where it has no bench', async () => {
    const runId = await importClass(site.db, site.student)
    const form = new FormData()
    for (const [name, value] of [
      ['anodeVolts', '200'],
      ['coilAmps', '1.5'],
      ['polarity', '1'],
    ] as const)
      form.set(name, value)
    const { status } = await addPlanned(site.db, { runId, person: site.student, form })
    expect(status).toBe(409)
  })
})

describe('The list of runs', () => {
  const list = async (person: Person, query = '') => {
    const request = new Request(`http://127.0.0.1:3000/runs${query}`)
    return runList(routeArgs(request, routeContext(site.db, person), {}) as never)
  }

  it('holds a student’s own runs, for staff all, with how many readings have a diameter', async () => {
    await storeCapture(site.db, { capture: bareCapture, personId: site.partner.id })
    const runId = await importClass(site.db, site.student)
    const mine = await list(site.student)
    expect(mine.runs).toMatchObject([
      {
        id: runId,
        isMine: true,
        bench: null,
        fileName: 'measurements.csv',
        readings: 24,
        withDiameter: 24,
        struck: 0,
      },
    ])
    expect((await list(site.partner)).runs).toMatchObject([
      {
        isMine: true,
        bench: { id: 'bench-1', name: 'Bench 1' },
        fileName: null,
        readings: 1,
        withDiameter: 0,
      },
    ])
    expect((await list(site.outsider)).runs).toEqual([])
    const all = await list(site.instructor)
    expect(all.runs.map(({ by }) => by).sort()).toEqual(['Kofi Adeyemi', 'Runa Lindqvist'])
  })

  it('counts what is struck apart', async () => {
    const runId = await importClass(site.db, site.student)
    const [reading] = await site.db.select().from(readings).where(eq(readings.runId, runId))
    const request = formRequest('/', { readingId: reading?.id ?? '', reason: 'Typed wrongly.' })
    await outcome(importedAction(routeArgs(request, routeContext(site.db, site.student), { runId }) as never))
    expect((await list(site.student)).runs).toMatchObject([{ readings: 24, struck: 1, withDiameter: 23 }])
  })
})
