import { createHash } from 'node:crypto'
import { readdirSync, readFileSync, rmSync } from 'node:fs'
import { dirname, join } from 'node:path'
import { eq } from 'drizzle-orm'
import sharp from 'sharp'
import { beforeAll, beforeEach, describe, expect, it, vi } from 'vitest'
import { loadBenchView } from '#app/benches/bench-view.server.ts'
import type { Person } from '#app/context.ts'
import { edges, photoMeasurements, photos, strikes } from '#app/db/schema.ts'
import { action as enterEdges } from '#app/routes/benches/edges.ts'
import { loader as page, action as send } from '#app/routes/benches/photo.tsx'
import { action as measure } from '#app/routes/benches/photo-measurements.ts'
import { loader as picture } from '#app/routes/benches/photo-picture.ts'
import { action as newRun } from '#app/routes/benches/runs.ts'
import { storeCapture } from '#app/runs/capture.server.ts'
import type { PhotoView } from '#app/runs/photo-view.server.ts'
import { bareCapture } from '#tests/support/bare-capture.ts'
import { type ClassSite, openClassSite, outcome, outcomeOf } from '#tests/support/class-site.ts'
import { formRequest, ownDatabaseUrl, routeArgs, routeContext } from '#tests/support/database.ts'
import { expectNear } from '#tests/support/near.ts'
import { blankPng, phoneNotes, quarteredPicture } from '#tests/support/pictures.ts'

let site: ClassSite
let filesDir: string
let readingId: string
let good: Buffer

beforeAll(async () => {
  const url = ownDatabaseUrl()
  vi.stubEnv('DATABASE_URL', url)
  filesDir = join(dirname(url.slice('file:'.length)), 'files')
  site = await openClassSite()
  good = await quarteredPicture({ width: 1400, height: 1400 }).withExif(phoneNotes).jpeg().toBuffer()
})

/** Each test finds one reading of bench 1 at 200 V and 1.5 A, in a run of its own. */
beforeEach(async () => {
  rmSync(filesDir, { recursive: true, force: true })
  await outcome(newRun(args(site.student, formRequest('/benches/bench-1/runs', {}))))
  await storeCapture(site.db, { capture: bareCapture, personId: site.student.id })
  readingId = (await view()).readings[0]?.id ?? ''
})

const view = (person: Person = site.student) => loadBenchView(site.db, { benchId: 'bench-1', person })
const reading = async () => {
  const [first] = (await view()).readings
  if (!first) throw new Error('There is no reading')
  return first
}
const args = (person: Person, request: Request, params: Record<string, string> = {}) =>
  routeArgs(request, routeContext(site.db, person), { benchId: 'bench-1', readingId, ...params }) as never

/** Sends a file as a browser does: called what it likes, and claiming what it likes. */
function upload(person: Person, bytes: Uint8Array<ArrayBuffer> | null, params: Record<string, string> = {}) {
  const body = new FormData()
  if (bytes) body.set('photo', new File([bytes], '../../../photo.jpg', { type: 'image/jpeg' }))
  const request = new Request(`http://127.0.0.1:3000/benches/bench-1/readings/${readingId}/photo`, {
    method: 'POST',
    body,
  })
  return outcome(send(args(person, request, params)))
}
const bytesOf = (buffer: Buffer) => new Uint8Array(buffer)

const files = () => {
  try {
    return readdirSync(filesDir, { recursive: true, encoding: 'utf8' }).filter((name) =>
      name.endsWith('.dat'),
    )
  } catch {
    return []
  }
}
const newestPhoto = async () => {
  const [row] = await site.db.select().from(photos).where(eq(photos.readingId, readingId))
  if (!row) throw new Error('There is no photo')
  return row
}
const shown = async (person: Person, query = '') => {
  const request = new Request(`http://127.0.0.1:3000/benches/bench-1/readings/${readingId}/photo${query}`)
  return (await page(args(person, request))) as PhotoView
}
const see = (person: Person, photoId: string, params: Record<string, string> = {}) =>
  picture(args(person, new Request('http://127.0.0.1:3000/'), { photoId, ...params })).catch(
    (thrown) => thrown,
  )

describe('A photo', () => {
  it('is kept as a file made anew, with a row that says whose, when, how large and its digest', async () => {
    expect(await upload(site.student, bytesOf(good))).toEqual({
      status: 200,
      body: { ok: true, answer: 'The photo of reading 1 is kept. Now mark it.' },
    })
    const row = await newestPhoto()
    expect(row).toMatchObject({ personId: site.student.id, width: 1400, height: 1400 })
    expect(Math.abs(row.uploadedAt.getTime() - Date.now())).toBeLessThan(60_000)
    const [file, ...others] = files()
    expect(others).toEqual([])
    const kept = readFileSync(join(filesDir, file ?? ''))
    expect([row.bytes, row.digest]).toEqual([
      kept.byteLength,
      createHash('sha256').update(kept).digest('hex'),
    ])
    for (const word of ['Exif', 'GPS', 'Maker of phones', 'Kofi Adeyemi', 'not-to-be-kept'])
      expect([good.includes(word) || word === 'GPS', kept.includes(word)], word).toEqual([true, false])
    expect((await sharp(kept).metadata()).exif).toBeUndefined()
  })

  it.each([
    ['none', null, 'Choose a photo of the beam with its scale first.'],
    ['an empty one', new Uint8Array(), 'Choose a photo of the beam with its scale first.'],
    [
      'a page that calls itself a photo',
      bytesOf(Buffer.from('<html>')),
      /^This is not a picture in JPEG, PNG or WebP/,
    ],
    ['one too large', new Uint8Array(16_000_001), /^This file has 16\.1 million bytes/],
    [
      'one that would unpack to 900 million pixels',
      bytesOf(blankPng(30_000, 30_000)),
      /^This picture has 900 million pixels/,
    ],
    ['half a one', bytesOf(blankPng(500, 500).subarray(0, 60)), /damaged/],
  ])('is refused beside its field, and leaves neither row nor file: %s', async (_, bytes, sentence) => {
    const { status, body } = await upload(site.student, bytes)
    expect(status).toBe(400)
    expect(body).toEqual({
      ok: false,
      errors: { photo: [typeof sentence === 'string' ? sentence : expect.stringMatching(sentence)] },
      refusals: [],
    })
    expect(await site.db.$count(photos, eq(photos.readingId, readingId))).toBe(0)
    expect(files()).toEqual([])
  })

  it('beyond the eighth of a person is refused, and its file is gone', async () => {
    const small = bytesOf(await quarteredPicture().png().toBuffer())
    for (let sent = 0; sent < 8; sent++) expect((await upload(site.student, small)).status).toBe(200)
    expect((await upload(site.student, small)).status).toBe(409)
    expect(files()).toHaveLength(8)
    expect((await upload(site.partner, small)).status).toBe(200)
  })

  it('of a struck reading is not taken; one that came before stays to be seen', async () => {
    await upload(site.student, bytesOf(good))
    const { id } = await newestPhoto()
    await site.db.insert(strikes).values({ readingId, personId: site.student.id, reason: 'Knocked.' })
    expect((await upload(site.student, bytesOf(good))).status).toBe(409)
    expect(files()).toHaveLength(1)
    expect((await see(site.student, id)).status).toBe(200)
  })

  it('of another class’s bench, or of a reading under another bench’s address, is not taken', async () => {
    expect((await upload(site.outsider, bytesOf(good))).status).toBe(404)
    expect((await upload(site.student, bytesOf(good), { benchId: 'bench-2' })).status).toBe(404)
    expect((await upload(site.student, bytesOf(good), { readingId: 'none' })).status).toBe(404)
    expect(files()).toEqual([])
  })
})

describe('The picture', () => {
  beforeEach(() => upload(site.student, bytesOf(good)))

  it('is given to whoever may watch the bench, as JPEG and nothing else, and kept by no cache', async () => {
    const row = await newestPhoto()
    for (const person of [site.student, site.partner, site.instructor, site.technician]) {
      const response: Response = await see(person, row.id)
      expect(response.status).toBe(200)
      expect(response.headers.get('Content-Type')).toBe('image/jpeg')
      expect(response.headers.get('X-Content-Type-Options')).toBe('nosniff')
      expect(response.headers.get('Cache-Control')).toBe('private, no-store')
      const bytes = Buffer.from(await response.arrayBuffer())
      expect(createHash('sha256').update(bytes).digest('hex')).toBe(row.digest)
    }
  })

  it('is not there for others, nor under another address, nor without its file', async () => {
    const { id } = await newestPhoto()
    const status = async (...asked: Parameters<typeof see>) => outcomeOf(await see(...asked)).status
    expect(await status(site.outsider, id)).toBe(404)
    expect(await status(site.student, id, { benchId: 'bench-2' })).toBe(404)
    expect(await status(site.student, id, { readingId: 'none' })).toBe(404)
    expect(await status(site.student, '../../site.db')).toBe(404)
    rmSync(filesDir, { recursive: true })
    expect(await status(site.student, id)).toBe(404)
  })
})

/** A beam of 7.8 cm at 100 px/cm; of the scale the lines at 0, 6 and 12 cm. */
const drawn = (diameterCentimetres = 7.8) => ({
  scaleMarks: [0, 6, 12].map((cm) => ({ x: 100 + 100 * cm, y: 1200, centimetres: String(cm) })),
  points: [0, 50, 100, 150, 200, 250, 300].map((degrees) => ({
    x: 700 + 50 * diameterCentimetres * Math.cos((degrees * Math.PI) / 180),
    y: 600 + 50 * diameterCentimetres * Math.sin((degrees * Math.PI) / 180),
  })),
})

describe('A measurement', () => {
  let photoId: string
  beforeEach(async () => {
    await upload(site.student, bytesOf(good))
    photoId = (await newestPhoto()).id
  })
  const save = (person: Person, marks: unknown = drawn(), params: Record<string, string> = {}) => {
    const text = typeof marks === 'string' ? marks : JSON.stringify(marks)
    return outcome(measure(args(person, formRequest('/', { marks: text }), { photoId, ...params })))
  }
  const enter = (person: Person, left: string, right: string) =>
    outcome(enterEdges(args(person, formRequest('/', { left, right }))))

  it('stores the marks and the diameter that the server works out, and gives e/m in the logbook', async () => {
    expect(await save(site.student)).toEqual({
      status: 200,
      body: { ok: true, answer: 'The diameter of reading 1 is saved.' },
    })
    const [row] = await site.db.select().from(photoMeasurements).where(eq(photoMeasurements.photoId, photoId))
    expect(row).toMatchObject({
      personId: site.student.id,
      points: drawn().points,
      scaleDegreesOfFreedom: null,
    })
    expect(row?.scaleMarks).toEqual(
      [0, 0.06, 0.12].map((scaleMetres, i) => ({ x: 100 + 600 * i, y: 1200, scaleMetres })),
    )
    expectNear(row?.diameterMetres ?? 0, 0.078, { rel: 1e-9 })

    const { result, photos: counted, edges: read } = await reading()
    expect(read).toEqual([])
    expect(counted).toMatchObject([{ name: 'Kofi Adeyemi', photoId }])
    expectNear(result?.diameterMetres ?? 0, 0.078, { rel: 1e-9 })
    // 2V/(kIr)² with k = (4/5)^1.5 µ0·130/0.15 m, before the field's unevenness.
    const field = ((4 / 5) ** 1.5 * 1.25663706127e-6 * 130 * 1.5) / 0.15
    expectNear(result?.chargeToMass ?? 0, 400 / (field * 0.039) ** 2, { rel: 0.01 })
    expect(result?.groups.map(({ name }) => name)).toContain('photo')
    expect(result?.groups.map(({ name }) => name)).not.toContain('edges')
  })

  it('of each person counts by the newest of edges and photo, and nothing older is overwritten', async () => {
    const names = async () => {
      const { edges: read, photos: counted } = await reading()
      return { edges: read.map(({ name }) => name), photos: counted.map(({ name }) => name) }
    }
    await enter(site.student, '3.35', '11.15')
    await save(site.student)
    expect(await names()).toEqual({ edges: [], photos: ['Kofi Adeyemi'] })
    await enter(site.partner, '3.30', '11.20')
    await save(site.partner, drawn(7.9))
    await save(site.partner, drawn(7.6))
    expect(await names()).toEqual({ edges: [], photos: ['Kofi Adeyemi', 'Runa Lindqvist'] })
    expectNear((await reading()).result?.diameterMetres ?? 0, (0.078 + 0.076) / 2, { rel: 1e-9 })
    await enter(site.student, '3.40', '11.10')
    expect(await names()).toEqual({ edges: ['Kofi Adeyemi'], photos: ['Runa Lindqvist'] })
    expectNear((await reading()).result?.diameterMetres ?? 0, (0.077 + 0.076) / 2, { rel: 1e-9 })
    expect(await site.db.$count(photoMeasurements, eq(photoMeasurements.photoId, photoId))).toBe(3)
    expect(await site.db.$count(edges, eq(edges.readingId, readingId))).toBe(3)
  })

  it('is shown again with its own marks to whoever made it, and with the photo alone to others', async () => {
    await save(site.student)
    const mine = await shown(site.student)
    expect(mine.photo).toEqual({ id: photoId, width: 1400, height: 1400 })
    expect(mine.saved).toEqual(drawn())
    const others = await shown(site.partner)
    expect([others.photo?.id, others.saved]).toEqual([photoId, null])
    await upload(site.partner, bytesOf(good))
    const own = (await shown(site.partner)).photo?.id
    expect(own).not.toBe(photoId)
    expect((await shown(site.student)).photo?.id).toBe(photoId)
    expect((await shown(site.student, `?photo=${own}`)).photo?.id).toBe(own)
    expect((await outcome(shown(site.student, '?photo=none'))).status).toBe(404)
    expect((await outcome(shown(site.outsider))).status).toBe(404)
  })

  it.each([
    ['nothing', ''],
    ['no marks', { scaleMarks: [], points: [] }],
    ['two points', { ...drawn(), points: drawn().points.slice(0, 2) }],
    ['points on a line', { ...drawn(), points: [1, 2, 3, 4].map((i) => ({ x: 100 * i, y: 300 })) }],
    ['one scale mark', { ...drawn(), scaleMarks: drawn().scaleMarks.slice(0, 1) }],
    ['a mark beside the photo', { ...drawn(), points: [...drawn().points, { x: 1500, y: 3 }] }],
    ['a diameter of its own', { ...drawn(), points: [], diameterMetres: 0.078 }],
  ])('of %s is refused in a sentence, and nothing is stored', async (_, marks) => {
    const { status, body } = await save(site.student, marks)
    expect(status).toBe(400)
    expect(body).toEqual({
      ok: false,
      errors: { marks: [expect.stringMatching(/^[A-Z].+\.$/)] },
      refusals: [],
    })
    expect(await site.db.$count(photoMeasurements, eq(photoMeasurements.photoId, photoId))).toBe(0)
  })

  it('of another class’s bench, of another reading’s photo or of a struck reading is not taken', async () => {
    expect((await save(site.outsider)).status).toBe(404)
    expect((await save(site.student, drawn(), { benchId: 'bench-2' })).status).toBe(404)
    expect((await save(site.student, drawn(), { photoId: 'none' })).status).toBe(404)
    await storeCapture(site.db, { capture: bareCapture, personId: site.student.id })
    const second = (await view()).readings[1]?.id ?? ''
    expect((await save(site.student, drawn(), { readingId: second })).status).toBe(404)
    await site.db.insert(strikes).values({ readingId, personId: site.student.id, reason: 'Knocked.' })
    expect((await save(site.student)).status).toBe(409)
    expect(await site.db.$count(photoMeasurements, eq(photoMeasurements.photoId, photoId))).toBe(0)
  })
})
