import { once } from 'node:events'
import { connect } from 'node:net'
import pino from 'pino'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { WebSocket } from 'ws'
import { createBus } from '#bridge/bus.ts'
import { monotonicClock } from '#bridge/clock.ts'
import { createHttp } from '#bridge/http.ts'
import { createOpenPort } from '#bridge/instruments/open-port.ts'
import { createRoom } from '#bridge/room.ts'
import {
  accept,
  type BridgeSite,
  bridgeSecret,
  bringToReady,
  openSocket,
  origin,
  type Page,
  people,
  signedPost,
  startBridgeSite,
  ticketOf,
  waitForState,
  waitUntilOff,
} from '#tests/support/bridge.ts'
import { until } from '#tests/support/processes.ts'

let site: BridgeSite
let page: Page

beforeEach(async () => {
  site = await startBridgeSite({ changes: { mostSockets: 4 } })
  page = await openSocket(site.address, { ticket: ticketOf(people.student) })
  await waitUntilOff(page)
})
afterEach(async () => {
  await page.close()
  await site.close()
})

const isUp = async () => (await fetch(`${site.address}/health`)).ok
const closed = (gone: Page) => until('the closing', () => gone.socket.readyState === WebSocket.CLOSED)
const byeOf = (gone: Page) => {
  const bye = gone.messages.find(({ type }) => type === 'bye')
  return bye?.type === 'bye' ? bye.reason : ''
}

/** What the bridge answers to these bytes, up to the end of the connection. */
async function raw(text: string): Promise<string> {
  const { hostname, port } = new URL(site.address)
  const socket = connect({ host: hostname, port: Number(port) })
  let heard = ''
  socket.on('data', (data) => {
    heard += data.toString()
  })
  socket.write(text)
  await once(socket, 'close')
  return heard
}

describe('A page that means harm', () => {
  it.each([
    ['a version that has no text', '{"type":"present","version":{"toString":1,"valueOf":1}}'],
    ['a version that is a list', '{"version":[[[]]]}'],
    ['a prototype', '{"__proto__":{"type":"make-safe"},"constructor":1,"version":1}'],
    ['no object', 'null'],
  ])('cannot end the bridge with %s', async (_, text) => {
    page.socket.send(text)
    await closed(page)
    expect(byeOf(page)).not.toBe('')
    expect(await isUp()).toBe(true)
  })

  it.each(['//', 'http://[', '/telemetry?ticket=%'])(
    'cannot end the bridge with the address %s',
    async (path) => {
      const answer = await raw(
        `GET ${path} HTTP/1.1\r\nHost: bridge\r\nOrigin: ${origin}\r\nConnection: Upgrade\r\nUpgrade: websocket\r\n\r\n`,
      )
      expect(answer).toMatch(/^HTTP\/1\.1 4\d\d /)
      expect(await isUp()).toBe(true)
    },
  )

  it('is sent away when it floods, and the others keep their link', async () => {
    const other = await openSocket(site.address, { ticket: ticketOf(people.technician) })
    for (let i = 0; i < 200; i++) page.send({ type: 'make-safe', version: 1, benchId: 'bench-1' })
    await closed(page)
    expect(byeOf(page)).toMatch(/Too many messages/)
    const done = await until('the events', () => {
      const made = other.events().filter(({ kind }) => kind === 'make-safe')
      return made.length > 0 ? made : null
    })
    expect(done.length).toBeLessThan(60)
    await waitForState(other, ({ phase }) => phase === 'off')
    await other.close()
  })

  it('cannot open sockets without number', async () => {
    const open: Page[] = []
    for (let i = 0; i < 3; i++)
      open.push(await openSocket(site.address, { ticket: ticketOf(people.student) }))
    await expect(openSocket(site.address, { ticket: ticketOf(people.student) })).rejects.toThrow('HTTP 503')
    await open[0]?.close()
    await until('a free place', () =>
      openSocket(site.address, { ticket: ticketOf(people.student) }).then(
        (late) => open.push(late),
        () => null,
      ),
    )
    for (const one of open) await one.close()
  })

  it('who is a guest cannot put the name of a bench that is none into the log', async () => {
    const guest = await openSocket(site.address, { ticket: ticketOf(people.guest) })
    guest.send({ type: 'make-safe', version: 1, benchId: 'x'.repeat(2000) })
    const event = await until('the refusal', () => page.events().find(({ kind }) => kind === 'refusal'))
    expect(event.benchId).toBeNull()
    expect(event.sentence).not.toMatch(/xxx/)
    await guest.close()
  })
})

describe('Presence', () => {
  it('of somebody whose keys were revoked ends, though the page answers no farewell and goes on talking', async () => {
    const watcher = await openSocket(site.address, { ticket: ticketOf(people.technician) })
    await bringToReady(site, page, people.student)
    page.socket.pause()
    const start = performance.now()
    await signedPost(site.address, '/revocations', { personId: people.student.personId })
    await waitForState(watcher, ({ controls, heater }) => controls === null && !heater.on, { limitMs: 9000 })
    expect((performance.now() - start) / 1000).toBeLessThan(6.5)
    page.socket.terminate()
    await watcher.close()
  })

  it('of a page that falls silent ends within five seconds and a moment', async () => {
    const watcher = await openSocket(site.address, { ticket: ticketOf(people.technician) })
    await accept(site.address, people.student, { kind: 'take-controls' })
    page.send({ type: 'present', version: 1, benchId: 'bench-1', input: true })
    await waitForState(watcher, ({ controls }) => controls !== null)
    page.socket.pause()
    const start = performance.now()
    await waitForState(watcher, ({ controls }) => controls === null, { limitMs: 9000 })
    const seconds = (performance.now() - start) / 1000
    expect(seconds).toBeLessThan(5.9)
    page.socket.terminate()
    await watcher.close()
  })
})

describe('A resume key', () => {
  it('is not renewed by its own use: a page with the app away ends twelve hours after its ticket', async () => {
    const again = await openSocket(site.address, { resume: page.hello.resumeKey })
    expect(again.hello.resumeKey).toBe(page.hello.resumeKey)
    await again.close()
  })
})

describe('The HTTP of the bridge', () => {
  it('hangs up on who does not finish a request', async () => {
    const start = performance.now()
    await raw('POST /make-safe HTTP/1.1\r\nHost: bridge\r\nX-Slow: ')
    expect((performance.now() - start) / 1000).toBeLessThan(9)
  })

  it('answers a body that is too large before it is sent', async () => {
    const answer = await raw('POST /make-safe HTTP/1.1\r\nHost: bridge\r\nContent-Length: 9000000\r\n\r\n')
    expect(answer).toMatch(/^HTTP\/1\.1 413 /)
  })

  it('outlives a connection that cannot be accepted', async () => {
    const log = pino({ level: 'silent' })
    const room = createRoom({
      openPort: createOpenPort({}),
      clock: monotonicClock,
      presenceClock: monotonicClock,
      wallOf: (at) => at,
      bus: createBus(),
      log,
      onEvent: () => undefined,
      onSummaries: () => undefined,
    })
    const server = createHttp({
      room,
      secret: bridgeSecret,
      startedAt: 0,
      health: () => ({}),
      onConfiguration: async () => undefined,
      onRevocation: async () => undefined,
      log,
    })
    expect(() => server.emit('error', new Error('accept EMFILE'))).not.toThrow()
  })
})
