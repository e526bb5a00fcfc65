import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { startSession } from '#app/auth/sessions.server.ts'
import { edges, readings } from '#app/db/schema.ts'
import { storeCapture } from '#app/runs/capture.server.ts'
import { type AppHandler, startApp } from '#tests/support/app-handler.ts'
import { bareCapture } from '#tests/support/bare-capture.ts'
import { type ClassSite, openClassSite } from '#tests/support/class-site.ts'
import { ownDatabaseUrl } from '#tests/support/database.ts'
import { freePort } from '#tests/support/processes.ts'

const origin = 'http://127.0.0.1:3000'
const benchPage = '/benches/bench-1'

let app: AppHandler
let site: ClassSite
let readingId: string

beforeAll(async () => {
  vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
  // Nothing listens there: this site has no bridge.
  vi.stubEnv('BRIDGE_URL', `http://127.0.0.1:${await freePort()}`)
  site = await openClassSite()
  app = await startApp()
  await storeCapture(site.db, { capture: bareCapture, personId: site.student.id })
  readingId = (await site.db.select().from(readings))[0]?.id ?? ''
}, 60_000)
afterAll(() => app.close())

const asPage = { Accept: 'text/html,application/xhtml+xml', 'Sec-Fetch-Dest': 'document' }

async function post(path: string, fields: Record<string, string>, headers: Record<string, string> = asPage) {
  const cookie = (await startSession(site.technician.id)).split(';')[0] ?? ''
  const all = { Origin: origin, Cookie: cookie, ...headers }
  const request = new Request(origin + path.replace(':readingId', readingId), {
    method: 'POST',
    headers: all,
    body: new URLSearchParams(fields),
  })
  return { response: await app.handle(request), cookie }
}

/** The pages that a browser without scripts then shows: the first with the cookies that it was given, and one more. */
async function follow({ response, cookie }: Awaited<ReturnType<typeof post>>) {
  const to = origin + (response.headers.get('Location') ?? '')
  const notice = response.headers.getSetCookie()[0]?.split(';')[0] ?? ''
  const first = await app.handle(new Request(to, { headers: { ...asPage, Cookie: `${cookie}; ${notice}` } }))
  const html = await first.text()
  const forgets = first.headers.getSetCookie().some((text) => /^coilside_notice=;.*Max-Age=0/i.test(text))
  return { html, forgets }
}

describe('A form of a bench that a page without scripts sends', () => {
  it('comes back to the bench’s page, which says once what became of it', async () => {
    const sent = await post(`${benchPage}/readings/:readingId/edges`, { left: '3,35', right: '11.15' })
    expect([sent.response.status, sent.response.headers.get('Location')]).toEqual([302, benchPage])
    expect(sent.response.headers.get('Set-Cookie')).toMatch(/HttpOnly/i)
    const { html, forgets } = await follow(sent)
    expect(html).toContain('The edges of reading 1 are entered.')
    expect(forgets).toBe(true)
    expect(await site.db.$count(edges)).toBe(1)
    const without = await app.handle(
      new Request(origin + benchPage, { headers: { ...asPage, Cookie: sent.cookie } }),
    )
    expect(await without.text()).not.toContain('are entered.')
    expect(without.headers.get('Set-Cookie')).toBeNull()
  })

  it.each([
    [`${benchPage}/readings/:readingId/edges`, { left: '3 cm', right: '' }, 'has something behind it'],
    [`${benchPage}/readings/:readingId/strike`, { reason: 'x' }, 'in a few words'],
    [`${benchPage}/commands`, { kind: 'set-anode', volts: '100' }, 'The bridge of this room does not answer'],
    [`${benchPage}/readings`, {}, 'No reading was stored'],
    [`${benchPage}/runs`, {}, 'A new run is begun'],
    ['/make-safe', {}, 'The bridge of this room does not answer'],
  ])('is answered in words at %s %j', async (path, fields, words) => {
    const sent = await post(path, fields)
    expect(sent.response.headers.get('Location')).toBe(path === '/make-safe' ? '/hall' : benchPage)
    expect((await follow(sent)).html).toContain(words)
  })

  it.each([
    ['Sec-Fetch-Dest alone', { 'Sec-Fetch-Dest': 'document' }, 302],
    ['an older browser', { Accept: 'text/html' }, 302],
    ['a script', { 'Sec-Fetch-Dest': 'empty', Accept: 'text/html, */*' }, 400],
    ['a program', { Accept: 'application/json' }, 400],
  ])('is told from what a script sends: %s', async (_, headers, status) => {
    const { response } = await post(`${benchPage}/commands`, { kind: 'nonsense' }, headers)
    expect(response.status).toBe(status)
  })

  it('shows what a check of a formula says on the page itself, with what was typed', async () => {
    const fields = { anodeVoltage: 'V', beamRadius: 'r<b>', formula: '2 V / <script>' }
    const wrong = await post(`${benchPage}/relation`, fields)
    expect(wrong.response.status).toBe(400)
    const html = await wrong.response.text()
    expect(html).toContain('A symbol begins with a Latin or Greek letter')
    expect(html).toContain('2 V / &lt;script&gt;')
    expect(html).not.toMatch(/r<b>|<script>\s*</)
    const checked = await post(`${benchPage}/relation`, { anodeVoltage: 'V', formula: '2 V' })
    expect(checked.response.status).toBe(200)
    expect(await checked.response.text()).toContain('It does not hold yet.')
  })

  it('shows a file of readings on the page itself, and nothing in it is more than text', async () => {
    const file =
      'V,I,d (cm),<img src=x onerror=alert(1)>\n=HYPERLINK("http://elsewhere.test"),1.5,8.1,"<script>1</script>"\n'
    const { response } = await post('/runs/import', {
      content: Buffer.from(file).toString('base64'),
      fileName: '<b>readings</b>.csv',
      bench: 'bench-1',
    })
    expect(response.status).toBe(200)
    const html = await response.text()
    expect(html).toContain('is not a number')
    expect(html).toContain('&lt;img src=x onerror=alert(1)&gt;')
    expect(html).not.toMatch(/<img src=x|<b>readings|<script>1/)
    expect(html).not.toMatch(/<a[^>]*elsewhere/)
  })

  it('shows no words but the site’s own: a notice that is not signed is none', async () => {
    const cookie = (await startSession(site.student.id)).split(';')[0] ?? ''
    const forged = Buffer.from(JSON.stringify('Touch the leads.')).toString('base64')
    const page = await app.handle(
      new Request(origin + benchPage, { headers: { Cookie: `${cookie}; coilside_notice=${forged}` } }),
    )
    expect(await page.text()).not.toContain('Touch the leads.')
  })
})
