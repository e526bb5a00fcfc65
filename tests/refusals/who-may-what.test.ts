import { sql } from 'drizzle-orm'
import { afterAll, beforeAll, beforeEach, describe, expect, it, vi } from 'vitest'
import { startSession } from '#app/auth/sessions.server.ts'
import {
  edges,
  photoMeasurements,
  photos,
  plannedSettings,
  readings,
  relations,
  runs,
  statements,
  strikes,
} from '#app/db/schema.ts'
import { keepPhoto } from '#app/files/photo-files.server.ts'
import routes from '#app/routes.ts'
import { storeCapture } from '#app/runs/capture.server.ts'
import { type AppHandler, startApp } from '#tests/support/app-handler.ts'
import { bareCapture } from '#tests/support/bare-capture.ts'
import { offState } from '#tests/support/bench-state.ts'
import { type ClassSite, openClassSite } from '#tests/support/class-site.ts'
import { ownDatabaseUrl } from '#tests/support/database.ts'
import { type StandInBridge, startStandInBridge } from '#tests/support/stand-in-bridge.ts'

const origin = 'http://127.0.0.1:3000'
const secret = 'a-secret-of-this-test-only'
const who = ['nobody', 'outsider', 'student', 'instructor', 'technician'] as const
type Who = (typeof who)[number]

let app: AppHandler
let bridge: StandInBridge
let site: ClassSite
let readingId: string
let photoId: string
let runId: string

beforeAll(async () => {
  bridge = await startStandInBridge(secret)
  vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
  vi.stubEnv('BRIDGE_SECRET', secret)
  vi.stubEnv('BRIDGE_URL', bridge.url)
  site = await openClassSite()
  app = await startApp()
}, 60_000)
afterAll(async () => {
  await app.close()
  await bridge.close()
})

const tables = [
  ...['planned_settings', 'statements', 'photo_measurements', 'photos', 'edges', 'strikes'],
  ...['reading_samples', 'stated_diameters', 'rungs', 'readings', 'imports', 'checklists', 'runs'],
]

/** Each test finds one reading of bench 1, captured by the student's partner, with a photo of theirs. */
beforeEach(async () => {
  for (const table of tables) await site.db.run(sql.raw(`delete from ${table}`))
  await storeCapture(site.db, { capture: bareCapture, personId: site.partner.id })
  const reading = await site.db.query.readings.findFirst()
  readingId = reading?.id ?? ''
  runId = reading?.runId ?? ''
  const figures = { digest: 'none', width: 1000, height: 1000, bytes: 4 }
  const [photo] = await site.db
    .insert(photos)
    .values({ readingId, personId: site.partner.id, ...figures })
    .returning({ id: photos.id })
  photoId = photo?.id ?? ''
  await keepPhoto(photoId, new Uint8Array([1, 2, 3, 4]))
  bridge.asked.length = 0
  bridge.answer = ({ path }) => {
    if (path === '/make-safe') return { body: { benches: [] } }
    if (path.endsWith('/captures')) return { body: { accepted: true, capture: bareCapture } }
    return { body: { accepted: true, refusals: [], answer: 'Done.', state: offState('bench-1') } }
  }
})

type Send = { path: string; method?: string; fields?: Record<string, string>; from?: string | null }

async function send(person: Who, { path, method = 'GET', fields = {}, from = origin }: Send) {
  const headers = new Headers()
  if (person !== 'nobody') headers.set('Cookie', (await startSession(site[person].id)).split(';')[0] ?? '')
  if (method !== 'GET' && from !== null) headers.set('Origin', from)
  const body = method === 'GET' ? null : new URLSearchParams(fields)
  return app.handle(
    new Request(
      origin + path.replace(':readingId', readingId).replace(':photoId', photoId).replace(':runId', runId),
      {
        method,
        headers,
        body,
      },
    ),
  )
}

/** Rows that a refused request must not change. Sessions come with every request of a test. */
const rows = async () => ({
  commands: await site.db
    .run(sql`select count(*) as n from bench_commands`)
    .then(({ rows: [row] }) => row?.n),
  acknowledged: await site.db
    .run(sql`select count(*) as n from acknowledgements`)
    .then(({ rows: [row] }) => row?.n),
  runs: await site.db.$count(runs),
  readings: await site.db.$count(readings),
  edges: await site.db.$count(edges),
  photos: await site.db.$count(photos),
  photoMeasurements: await site.db.$count(photoMeasurements),
  strikes: await site.db.$count(strikes),
  planned: await site.db.$count(plannedSettings),
  relations: await site.db.$count(relations),
  statements: await site.db.$count(statements),
})

type Row = [method: 'GET' | 'POST', route: string, statuses: number[], fields?: Record<string, string>]
const bench = '/benches/:benchId'

const marks = JSON.stringify({
  scaleMarks: [0, 12].map((cm) => ({ x: 50 * cm, y: 900, centimetres: `${cm}` })),
  points: [
    { x: 100, y: 300 },
    { x: 300, y: 100 },
    { x: 500, y: 300 },
  ],
})

const sentReadings = {
  content: Buffer.from('V,I,d (cm)\n200,1.5,8.1\n').toString('base64'),
  fileName: 'readings.csv',
  bench: 'bench-1',
}

/** A relation that holds, and so is stored. */
const ownRelation = {
  anodeVoltage: 'V',
  coilCurrent: 'I',
  beamRadius: 'r',
  turns: 'N',
  coilRadius: 'R',
  magneticConstant: 'μ₀',
  formula: '2 V (5/4)³ R² / (μ₀ N I r)²',
}

/** Every route with everyone: nobody signed in, a student of another class, a student, an instructor, a technician. */
const table: Row[] = [
  ['GET', '/sign-in', [200, 302, 302, 302, 302]],
  ['POST', '/sign-in', [400, 302, 302, 302, 302]],
  ['GET', '/sign-out', [302, 302, 302, 302, 302]],
  ['POST', '/sign-out', [302, 302, 302, 302, 302]],
  ['GET', '/room-light', [302, 302, 302, 302, 302]],
  ['POST', '/room-light', [200, 200, 200, 200, 200], { roomLight: 'lit' }],
  ['GET', '/', [302, 302, 302, 302, 302]],
  ['GET', '/account', [302, 200, 200, 200, 200]],
  ['POST', '/account', [401, 400, 400, 400, 400]],
  ['GET', '/hall', [302, 200, 200, 200, 200]],
  ['GET', '/make-safe', [302, 403, 403, 302, 302]],
  ['POST', '/make-safe', [401, 403, 403, 200, 200]],
  ['GET', bench, [302, 404, 200, 200, 200]],
  ['GET', `${bench}/cautions`, [302, 404, 200, 200, 200]],
  ['POST', `${bench}/cautions`, [401, 404, 302, 302, 302]],
  ['GET', `${bench}/log`, [302, 404, 200, 200, 200]],
  ['GET', `${bench}/planner`, [302, 404, 200, 200, 200]],
  ['GET', `${bench}/stability`, [302, 404, 200, 200, 200]],
  ['GET', `${bench}/relation`, [302, 404, 200, 200, 200]],
  ['POST', `${bench}/relation`, [401, 404, 200, 200, 200], ownRelation],
  ['GET', `${bench}/commands`, [302, 302, 302, 302, 302]],
  ['POST', `${bench}/commands`, [401, 404, 200, 200, 200], { kind: 'take-controls' }],
  ['POST', `${bench}/commands`, [401, 404, 403, 200, 200], { kind: 'take-over' }],
  ['POST', `${bench}/commands`, [401, 404, 200, 200, 200], { kind: 'make-safe' }],
  ['POST', `${bench}/commands`, [401, 404, 200, 200, 200], { kind: 'reset-trip' }],
  ['GET', `${bench}/runs`, [302, 302, 302, 302, 302]],
  ['POST', `${bench}/runs`, [401, 404, 200, 200, 200]],
  ['GET', `${bench}/readings`, [302, 302, 302, 302, 302]],
  ['POST', `${bench}/readings`, [401, 404, 200, 200, 200]],
  ['GET', `${bench}/checklist`, [302, 302, 302, 302, 302]],
  ['POST', `${bench}/checklist`, [401, 404, 409, 409, 409]],
  ['GET', `${bench}/typed-readings`, [302, 302, 302, 302, 302]],
  ['POST', `${bench}/typed-readings`, [401, 404, 409, 409, 409], { volts: '200', amps: '1.5' }],
  ['GET', `${bench}/readings/:readingId/edges`, [302, 302, 302, 302, 302]],
  ['POST', `${bench}/readings/:readingId/edges`, [401, 404, 200, 200, 200], { left: '3', right: '11' }],
  ['GET', `${bench}/readings/:readingId/photo`, [302, 404, 200, 200, 200]],
  // Without a file, which is answered beside its field.
  ['POST', `${bench}/readings/:readingId/photo`, [401, 404, 400, 400, 400]],
  ['GET', `${bench}/readings/:readingId/photos/:photoId`, [302, 404, 200, 200, 200]],
  ['GET', `${bench}/readings/:readingId/photos/:photoId/measurements`, [302, 302, 302, 302, 302]],
  ['POST', `${bench}/readings/:readingId/photos/:photoId/measurements`, [401, 404, 200, 200, 200], { marks }],
  ['GET', `${bench}/readings/:readingId/strike`, [302, 302, 302, 302, 302]],
  ['POST', `${bench}/readings/:readingId/strike`, [401, 404, 403, 200, 200], { reason: 'Read badly.' }],
  // The run of the student's partner, in which the student took no part.
  ['GET', '/runs', [302, 200, 200, 200, 200]],
  ['GET', '/runs/import', [302, 200, 200, 200, 200]],
  ['POST', '/runs/import', [401, 404, 200, 200, 200], sentReadings],
  // Stored is only what was shown before.
  ['POST', '/runs/import', [401, 404, 400, 400, 400], { ...sentReadings, intent: 'store' }],
  // A run that was measured here was imported from no file.
  ['GET', '/runs/:runId/imported', [302, 404, 404, 404, 404]],
  ['POST', '/runs/:runId/imported', [401, 404, 404, 404, 404], { reason: 'Read badly.' }],
  ['GET', '/runs/:runId/analysis', [302, 404, 404, 200, 200]],
  ['GET', '/runs/:runId/plan', [302, 302, 302, 302, 302]],
  [
    'POST',
    '/runs/:runId/plan',
    [401, 404, 404, 200, 200],
    { anodeVolts: '200', coilAmps: '1.5', polarity: '1' },
  ],
  ['GET', '/runs/:runId/statement', [302, 302, 302, 302, 302]],
  ['POST', '/runs/:runId/statement', [401, 404, 404, 200, 200], { fit: 'general' }],
  ['POST', '/api/tickets', [401, 200, 200, 200, 200]],
  ['POST', '/api/tickets', [401, 404, 200, 200, 200], { benchId: 'bench-1' }],
  ['GET', '/api/health', [200, 200, 200, 200, 200]],
  ['GET', '/api/bridge/configuration', [401, 401, 401, 401, 401]],
  ['POST', '/api/bridge/spool', [401, 401, 401, 401, 401]],
  ['GET', '/*', [404, 404, 404, 404, 404]],
  ['POST', '/*', [405, 405, 405, 405, 405]],
]

const titleOf = ([method, route, , fields]: Row) =>
  [method, route, fields?.kind ?? fields?.intent ?? ''].join(' ').trim()
const pathOf = (route: string) => route.replace(':benchId', 'bench-1')

type Entry = { path?: string; index?: boolean; children?: Entry[] }
const flatten = (entries: Entry[], above = ''): string[] =>
  entries.flatMap(({ path, index, children }) => {
    const here = path === undefined ? above : `${above}/${path}`
    if (children) return flatten(children, here)
    return path !== undefined || index ? [here || '/'] : []
  })

describe('The table of routes and roles', () => {
  it('holds every route of the site map', async () => {
    expect([...new Set(table.map(([, route]) => route))].sort()).toEqual(
      flatten((await routes) as Entry[]).sort(),
    )
  })

  it.each(table.map((row) => ({ name: titleOf(row), row })))(
    'answers each of them as it should: $name',
    async ({ row: [method, route, statuses, fields] }) => {
      const found: number[] = []
      for (const [index, person] of who.entries()) {
        await site.db.delete(strikes)
        const before = await rows()
        bridge.asked.length = 0
        const response = await send(person, { path: pathOf(route), method, fields })
        await response.text()
        found.push(response.status)
        const isRefused = [401, 403, 404].includes(statuses[index] ?? 0)
        if (!isRefused) continue
        // A take-over refused for the role is noted in the log as such.
        const isNoted = fields?.kind === 'take-over' && statuses[index] === 403
        expect(await rows()).toEqual(isNoted ? { ...before, commands: Number(before.commands) + 1 } : before)
        expect(bridge.asked).toEqual([])
      }
      expect(found).toEqual(statuses)
    },
  )

  it('sends whoever is not signed in to the sign-in page, and back to where they were going', async () => {
    const response = await send('nobody', { path: '/benches/bench-1/log?page=2' })
    expect(response.headers.get('Location')).toBe(
      `/sign-in?${new URLSearchParams({ returnTo: '/benches/bench-1/log?page=2' })}`,
    )
  })
})

describe('A request for the data of one route alone', () => {
  it.each([
    ['/benches/bench-1', 'routes/benches/bench'],
    ['/benches/bench-1/log', 'routes/benches/log'],
    ['/benches/bench-1/cautions', 'routes/benches/cautions'],
    ['/benches/bench-1/readings/:readingId/photo', 'routes/benches/photo'],
    ['/hall', 'routes/hall/hall'],
  ])('of %s passes the guards as well', async (path, id) => {
    const data = `${path}.data?_routes=${encodeURIComponent(id)}`
    const asNobody = await (await send('nobody', { path: data })).text()
    expect(asNobody).toContain('SingleFetchRedirect')
    const asOutsider = await (await send('outsider', { path: data })).text()
    for (const text of [asNobody, asOutsider]) expect(text).not.toMatch(/"bench-1"|door side|coilPair/)
    expect(await (await send('student', { path: data })).text()).toContain('door side')
  })
})

describe('A write from another origin', () => {
  const writes = table
    .filter(([method, route]) => method === 'POST' && !route.startsWith('/api/bridge/'))
    .map((row) => ({ name: titleOf(row), row }))
  const origins = ['https://elsewhere.test', 'http://127.0.0.1:4000', 'null', 'not an origin', null]

  it.each(writes)(
    'is refused with a technician’s session: $name',
    async ({ row: [method, route, , fields] }) => {
      // The framework's own check prints what it refuses.
      const printed = vi.spyOn(console, 'error').mockImplementation(() => {})
      const before = await rows()
      for (const from of origins) {
        const response = await send('technician', { path: pathOf(route), method, fields, from })
        await response.text()
        expect([400, 403], `${from}`).toContain(response.status)
        expect(response.headers.get('Set-Cookie')).toBeNull()
      }
      printed.mockRestore()
      expect(await rows()).toEqual(before)
      expect(bridge.asked).toEqual([])
    },
  )
})

describe('A ticket', () => {
  const ticketOf = async (person: Who, fields: Record<string, string> = {}) => {
    const response = await send(person, { path: '/api/tickets', method: 'POST', fields })
    const { ticket } = (await response.json()) as { ticket: string }
    return JSON.parse(Buffer.from(ticket.split('.')[0] ?? '', 'base64url').toString())
  }

  it('names the benches of a student’s classes, and every bench for staff', async () => {
    expect(await ticketOf('student')).toMatchObject({
      use: 'ticket',
      personId: site.student.id,
      role: 'student',
      benchIds: ['bench-1', 'bench-2', 'bench-3'],
      room: false,
    })
    expect(await ticketOf('outsider')).toMatchObject({ benchIds: [], room: false })
    expect(await ticketOf('technician')).toMatchObject({ benchIds: null, room: true })
  })

  it('of a bench’s page is for that bench alone', async () => {
    expect(await ticketOf('student', { benchId: 'bench-2' })).toMatchObject({ benchIds: ['bench-2'] })
    expect(await ticketOf('instructor', { benchId: 'bench-2' })).toMatchObject({ benchIds: ['bench-2'] })
  })
})
