import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { localPath } from '#app/auth/local-path.ts'
import { startSession } from '#app/auth/sessions.server.ts'
import { largestImportBody } from '#app/imports/limits.ts'
import { type AppHandler, startApp } from '#tests/support/app-handler.ts'
import { type ClassSite, openClassSite } from '#tests/support/class-site.ts'
import { ownDatabaseUrl } from '#tests/support/database.ts'
import { freePort } from '#tests/support/processes.ts'

let app: AppHandler
let site: ClassSite
let origin: string
let cookie: string

beforeAll(async () => {
  vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
  // Nothing listens there: this site has no bridge.
  vi.stubEnv('BRIDGE_URL', `http://127.0.0.1:${await freePort()}`)
  site = await openClassSite()
  app = await startApp()
  origin = await app.listen()
  cookie = (await startSession(site.student.id)).split(';')[0] ?? ''
}, 60_000)
afterAll(() => app.close())

const ask = (path: string, { headers, ...init }: RequestInit = {}) =>
  fetch(origin + path, {
    redirect: 'manual',
    ...init,
    headers: { Origin: origin, Cookie: cookie, ...(headers as Record<string, string>) },
  })

describe('A place to go on to after signing in', () => {
  it.each(['/hall', '/benches/bench-1/log?page=2', '/benches/bench-1#readings'])('may be %s', (path) => {
    expect(localPath(path)).toBe(path)
  })

  it.each([
    'https://elsewhere.test/',
    '//elsewhere.test',
    '/\\elsewhere.test',
    // A browser drops tabs and line ends from an address (WHATWG URL standard, basic URL parser, step 3).
    '/\t/elsewhere.test',
    '/\n/elsewhere.test',
    '\t//elsewhere.test',
    '/\r\\elsewhere.test',
    '/.//elsewhere.test',
    '/hall/..//elsewhere.test',
    'hall',
    'javascript:alert(1)',
    '',
    null,
    ['/hall'],
  ])('is never %j', (path) => {
    expect(localPath(path)).toBe('/')
  })

  it('is told to the browser as a path of this site', async () => {
    const body = new URLSearchParams({ email: 'partner@lab.test', password: 'read-both-edges' })
    const returnTo = new URLSearchParams({ returnTo: '/\t/elsewhere.test' })
    const response = await ask(`/sign-in?${returnTo}`, { method: 'POST', body, headers: { Cookie: '' } })
    expect(new URL(response.headers.get('Location') ?? '', origin).origin).toBe(origin)
  })

  it('is a page, also when it was the data of one route that was asked for', async () => {
    const response = await ask('/benches/bench-1/log.data?_routes=routes%2Fbenches%2Flog&page=2', {
      headers: { Cookie: '' },
    })
    const returnTo = new URLSearchParams({ returnTo: '/benches/bench-1/log?page=2' })
    expect(await response.text()).toContain(`/sign-in?${returnTo}"`)
  })
})

describe('A request that cannot be read', () => {
  const paths = [
    '/sign-in',
    '/account',
    '/room-light',
    '/api/tickets',
    '/benches/bench-1/commands',
    '/benches/bench-1/readings/none/edges',
    '/benches/bench-1/relation',
    '/runs/import',
    '/benches/bench-4/checklist',
    '/benches/bench-4/typed-readings',
    '/benches/bench-1/readings/none/photos/none/measurements',
    '/benches/bench-1/readings/none/strike',
  ]
  const bodies: [string, RequestInit][] = [
    ['JSON', { body: '{}', headers: { 'Content-Type': 'application/json' } }],
    ['no body', {}],
    ['half a form', { body: 'x', headers: { 'Content-Type': 'multipart/form-data; boundary=y' } }],
  ]

  it.each(paths)('is refused with 400 at %s, and no fault of the application is logged', async (path) => {
    const printed = vi.spyOn(console, 'error').mockImplementation(() => {})
    for (const [what, init] of bodies) {
      const response = await ask(path, { method: 'POST', ...init })
      expect(response.status, what).toBe(400)
      await response.text()
    }
    expect(printed).not.toHaveBeenCalled()
    printed.mockRestore()
  })

  it('is refused with 413 when it is too long for a form, and with 411 when its length is not told', async () => {
    const long = new URLSearchParams({ kind: 'take-controls', more: 'x'.repeat(70_000) })
    expect((await ask('/benches/bench-1/commands', { method: 'POST', body: long })).status).toBe(413)
    expect((await ask('/sign-in', { method: 'POST', body: long })).status).toBe(413)
    const file = new URLSearchParams({ content: 'x'.repeat(largestImportBody) })
    expect((await ask('/runs/import', { method: 'POST', body: file })).status).toBe(413)
    for (const path of ['/benches/bench-1/commands', '/api/bridge/spool']) {
      const body = new ReadableStream({
        start(controller) {
          controller.enqueue(new TextEncoder().encode('kind=take-controls'))
          controller.close()
        },
      })
      const headers = { 'Content-Type': 'application/x-www-form-urlencoded' }
      const init: RequestInit & { duplex: 'half' } = { method: 'POST', body, headers, duplex: 'half' }
      expect((await ask(path, init)).status, path).toBe(411)
    }
  })

  it('is let through as long as a photo is to where photos are sent, and there alone', async () => {
    const long = (bytes: number) => new Blob([new Uint8Array(bytes)])
    const statusOf = async (path: string, body: Blob) => {
      const headers = { 'Content-Type': 'multipart/form-data; boundary=y' }
      return (await ask(path, { method: 'POST', body, headers })).status
    }
    for (const path of [
      '/benches/bench-1/readings/none/photo',
      '/benches/bench-1/readings/none/photo.data',
    ]) {
      // There is no such reading, which is found out before the body is read.
      expect(await statusOf(path, long(1_000_000)), path).toBe(404)
      expect(await statusOf(path, long(25_000_000)), path).toBe(413)
    }
    for (const path of [
      '/benches/bench-1/readings/none/edges',
      '/benches/bench-1/readings/none/photos/none/measurements',
      '/benches/bench-1/readings/none/photo/more',
    ])
      expect(await statusOf(path, long(100_000)), path).toBe(413)
  })

  it('by a method that no route takes is refused without a fault', async () => {
    const printed = vi.spyOn(console, 'error').mockImplementation(() => {})
    expect((await ask('/hall', { method: 'OPTIONS' })).status).toBe(405)
    expect(printed).not.toHaveBeenCalled()
    printed.mockRestore()
  })

  it('is asked for by HEAD as by GET', async () => {
    const response = await ask('/hall', { method: 'HEAD', headers: { Cookie: '' } })
    expect([response.status, response.headers.get('Location')]).toEqual([302, '/sign-in?returnTo=%2Fhall'])
  })
})

describe('Every answer', () => {
  it.each(['/hall', '/benches/bench-1', '/benches/bench-1.data', '/sign-in', '/nowhere', '/api/health'])(
    'carries its policy and is kept by no cache: %s',
    async (path) => {
      const response = await ask(path)
      const html = await response.text()
      expect(response.headers.get('Cache-Control')).toBe('no-store')
      expect(response.headers.get('X-Content-Type-Options')).toBe('nosniff')
      const policy = response.headers.get('Content-Security-Policy') ?? ''
      expect(policy).toMatch(/default-src 'self'; script-src 'self' 'nonce-[^']+';/)
      expect(policy).not.toMatch(/script-src[^;]*unsafe|script-src-attr|\*/)
      if (!html.startsWith('<!DOCTYPE')) return
      const nonce = /script-src 'self' 'nonce-([^']+)'/.exec(policy)?.[1]
      const elements = html.match(/<(?:script|style)\b[^>]*>/g) ?? []
      expect(elements.length).toBeGreaterThan(0)
      for (const element of elements) expect(element).toContain(`nonce="${nonce}"`)
      expect(html).not.toMatch(/<[^>]+\son[a-z]+=/)
    },
  )

  it('has a nonce of its own', async () => {
    const policies = await Promise.all(
      Array.from({ length: 5 }, async () => (await ask('/sign-in')).headers.get('Content-Security-Policy')),
    )
    expect(new Set(policies).size).toBe(5)
  })

  it('of a fault holds neither its words nor where it was', async () => {
    const printed = vi.spyOn(console, 'error').mockImplementation(() => {})
    await site.db.$client.execute('alter table bench_revisions rename to hidden')
    try {
      for (const path of ['/hall', '/hall.data', '/api/tickets']) {
        const isTicket = path === '/api/tickets'
        const response = await ask(path, isTicket ? { method: 'POST', body: new URLSearchParams() } : {})
        expect(response.status).toBe(500)
        expect(await response.text()).not.toMatch(/no such table|bench_revisions|select |\.ts:|node_modules/)
      }
    } finally {
      await site.db.$client.execute('alter table hidden rename to bench_revisions')
      printed.mockRestore()
    }
  })
})

describe('A session', () => {
  it('that the browser brings to a new sign-in ends with it', async () => {
    const old = (await startSession(site.student.id)).split(';')[0] ?? ''
    const body = new URLSearchParams({ email: 'partner@lab.test', password: 'read-both-edges' })
    const response = await ask('/sign-in', { method: 'POST', body, headers: { Cookie: old } })
    expect(response.status).toBe(302)
    expect((await ask('/hall', { headers: { Cookie: old } })).status).toBe(302)
    const now = response.headers.getSetCookie()[0]?.split(';')[0] ?? ''
    expect(now).not.toBe(old)
    expect((await ask('/hall', { headers: { Cookie: now } })).status).toBe(200)
  })
})
