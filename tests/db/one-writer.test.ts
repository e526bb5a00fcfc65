import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { eq } from 'drizzle-orm'
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { startSession } from '#app/auth/sessions.server.ts'
import { acknowledgeCautions, hasAcknowledged } from '#app/benches/acknowledgements.server.ts'
import { storeBatch } from '#app/bridge-link/spool.server.ts'
import { edges, people, readings, strikes } from '#app/db/schema.ts'
import type { BenchEvent } from '#app/protocol/messages.ts'
import { action as roomLight } from '#app/routes/account/room-light.ts'
import { storeCapture } from '#app/runs/capture.server.ts'
import { enterEdges } from '#app/runs/edges.server.ts'
import { strikeReading } from '#app/runs/strike.server.ts'
import { bareCapture } from '#tests/support/bare-capture.ts'
import { type ClassSite, openClassSite } from '#tests/support/class-site.ts'
import { formRequest, ownDatabaseUrl, routeArgs, routeContext } from '#tests/support/database.ts'

let site: ClassSite
beforeAll(async () => {
  vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
  site = await openClassSite()
})
afterAll(() => site.db.$client.close())

const events = (first: number, count: number): BenchEvent[] =>
  Array.from({ length: count }, (_, index) => ({
    sequence: first + index,
    benchId: 'bench-1',
    at: 1_780_000_000,
    kind: 'warning',
    personId: null,
    personName: null,
    sentence: 'Something happened.',
    data: {},
  }))

const form = (fields: Record<string, string>) => {
  const data = new FormData()
  for (const [name, value] of Object.entries(fields)) data.set(name, value)
  return data
}

describe('The one writer of the database', () => {
  it('lets every kind of write through while batches of the bridge are being stored, and holds nothing up', async () => {
    const { db, student, partner } = site
    await storeCapture(db, { capture: bareCapture, personId: student.id })
    const [reading] = await db.select().from(readings)
    const at = { benchId: 'bench-1', readingId: reading?.id ?? '' }
    const cookie = (await startSession(student.id)).split(';')[0] ?? ''
    const dark = formRequest('/room-light', { roomLight: 'dark' }, { Cookie: cookie })
    const batch = (first: number) =>
      storeBatch(db, {
        bridgeId: 'room-1',
        oldest: { event: 1, summary: 1 },
        events: events(first, 600),
        summaries: [],
      })

    const startedAt = performance.now()
    await Promise.all([
      batch(1),
      startSession(partner.id),
      acknowledgeCautions(db, { personId: student.id }),
      roomLight(routeArgs(dark, routeContext(db), {}) as never),
      batch(601),
      enterEdges(db, { ...at, person: student, form: form({ left: '3', right: '11' }) }),
      enterEdges(db, { ...at, person: partner, form: form({ left: '3.1', right: '11' }) }),
      strikeReading(db, { ...at, person: student, form: form({ reason: 'Knocked.' }) }),
      storeCapture(db, { capture: bareCapture, personId: partner.id }),
      batch(1201),
    ])
    // Two writers at once would stand still for the busy time limit of two seconds, and one of them fail.
    expect(performance.now() - startedAt).toBeLessThan(1900)

    expect(await hasAcknowledged(db, student.id)).toBe(true)
    expect((await db.query.people.findFirst({ where: eq(people.id, student.id) }))?.roomLight).toBe('dark')
    expect(await db.$count(edges)).toBe(2)
    expect(await db.$count(strikes)).toBe(1)
    expect(await db.$count(readings)).toBe(2)
  })

  it('takes no edges that come after the strike, however close', async () => {
    const { db, student } = site
    await storeCapture(db, { capture: bareCapture, personId: student.id })
    const reading = (await db.select().from(readings)).at(-1)
    const at = { benchId: 'bench-1', readingId: reading?.id ?? '', person: student }
    const [struck, entered] = await Promise.all([
      strikeReading(db, { ...at, form: form({ reason: 'Knocked.' }) }),
      enterEdges(db, { ...at, form: form({ left: '3', right: '11' }) }),
    ])
    expect(struck.status).toBe(200)
    const isFirst = entered.status === 200
    expect(await db.$count(edges, eq(edges.readingId, at.readingId))).toBe(isFirst ? 1 : 0)
  })

  it('is gone round nowhere: no module of the application changes rows but in `write`', () => {
    const around = readdirSync('app', { recursive: true, encoding: 'utf8' })
      .filter((name) => /\.tsx?$/.test(name))
      .filter((name) =>
        /\b(db|database|siteDatabase\(\)\)?)\s*\.\s*(insert|update|delete|transaction|batch)\(/i.test(
          readFileSync(join('app', name), 'utf8'),
        ),
      )
    // The writer itself.
    expect(around).toEqual([join('db', 'client.server.ts')])
  })
})
