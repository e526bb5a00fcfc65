import { afterAll, beforeAll, describe, expect, it } from 'vitest'
import { WebSocket } from 'ws'
import {
  type BridgeSite,
  openSocket,
  type Page,
  people,
  quickBench,
  signedPost,
  startBridgeSite,
  ticketOf,
  waitForState,
  writeTicket,
} from '#tests/support/bridge.ts'
import { until } from '#tests/support/processes.ts'

let site: BridgeSite

beforeAll(async () => {
  site = await startBridgeSite({ benches: [quickBench(), quickBench({}, 'bench-2')] })
  const page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
  await waitForState(page, ({ phase }) => phase === 'off')
  await page.close()
})
afterAll(() => site.close())

const connect = (query: Parameters<typeof openSocket>[1], headers?: Record<string, string>) =>
  openSocket(site.address, query, headers)
const now = () => Date.now() / 1000
const ticket = () => ticketOf(people.student)

describe('The upgrade to telemetry', () => {
  it('is refused to a foreign origin, and to none', async () => {
    await expect(connect({ ticket: ticket() }, { origin: 'http://elsewhere.example' })).rejects.toThrow(
      'HTTP 403',
    )
    await expect(connect({ ticket: ticket() }, {})).rejects.toThrow('HTTP 403')
  })

  it('is refused without a ticket, and with one that is expired, forged, changed or of the other use', async () => {
    await expect(connect({})).rejects.toThrow('HTTP 401')
    await expect(connect({ ticket: 'nonsense' })).rejects.toThrow('HTTP 401')
    const old = { issuedAt: now() - 61, expiresAt: now() - 1 }
    await expect(connect({ ticket: ticketOf(people.student, old) })).rejects.toThrow('HTTP 401')
    const stretched = { issuedAt: now() - 61, expiresAt: now() + 3600 }
    await expect(connect({ ticket: ticketOf(people.student, stretched) })).rejects.toThrow('HTTP 401')
    await expect(connect({ ticket: writeTicket({}, 'a-secret-of-somebody-else') })).rejects.toThrow(
      'HTTP 401',
    )
    const [body, signature] = ticket().split('.')
    const changed = Buffer.from(
      JSON.stringify({ ...JSON.parse(Buffer.from(body ?? '', 'base64url').toString()), room: true }),
    )
    await expect(connect({ ticket: `${changed.toString('base64url')}.${signature}` })).rejects.toThrow(
      'HTTP 401',
    )
    await expect(connect({ resume: ticket() })).rejects.toThrow('HTTP 401')
  })

  it('is accepted with a good ticket, and answers with hello, state and the last minutes', async () => {
    const page = await connect({ ticket: ticket() })
    expect(page.hello).toMatchObject({
      version: 1,
      personId: people.student.personId,
      benchIds: ['bench-1', 'bench-2'],
    })
    expect(page.messages.slice(0, 3).map(({ type }) => type)).toEqual(['hello', 'state', 'samples'])
    const sample = page.messages.find((message) => message.type === 'samples')
    const wall = (sample?.type === 'samples' ? (sample.times[0] ?? 0) : 0) + page.hello.wallOffsetSeconds
    expect(Math.abs(wall - now())).toBeLessThan(60)
    await page.close()
  })

  it('shows only the benches of the ticket, and takes make safe only for them', async () => {
    const page = await connect({ ticket: ticketOf(people.student, { benchIds: ['bench-2'] }) })
    expect(page.hello.benchIds).toEqual(['bench-2'])
    await waitForState(page, ({ phase }) => phase === 'off', { benchId: 'bench-2' })
    await new Promise((resolve) => setTimeout(resolve, 600))
    expect(page.state('bench-1')).toBeUndefined()
    const staff = await connect({ ticket: ticketOf(people.technician) })
    page.send({ type: 'make-safe', version: 1, benchId: 'bench-1' })
    await until('the refusal', () => staff.events().find(({ kind }) => kind === 'refusal'))
    expect(staff.events().some(({ kind }) => kind === 'make-safe')).toBe(false)
    await page.close()
    await staff.close()
  })
})

describe('The socket', () => {
  it.each([
    [
      'another version',
      JSON.stringify({ type: 'present', version: 2, benchId: 'bench-1', input: true }),
      /reload/,
    ],
    ['a command', JSON.stringify({ type: 'set-anode', version: 1, volts: 100 }), /./],
    ['no JSON', 'make safe!', /not JSON/],
  ])('closes with a reason on %s', async (_, text, reason) => {
    const page = await connect({ ticket: ticket() })
    page.socket.send(text)
    await until('the closing', () => page.socket.readyState === WebSocket.CLOSED)
    const bye = page.messages.find(({ type }) => type === 'bye')
    expect(bye?.type === 'bye' ? bye.reason : '').toMatch(reason)
  })

  it('closes on a message that is too large', async () => {
    const page = await connect({ ticket: ticket() })
    page.socket.on('error', () => undefined)
    page.socket.send('x'.repeat(10_000))
    await until('the closing', () => page.socket.readyState === WebSocket.CLOSED)
  })

  it('numbers its samples without gaps, and states come at least once and at most about four times a second', async () => {
    const page = await connect({ ticket: ticketOf(people.student, { benchIds: ['bench-1'] }) })
    const from = page.messages.length
    await new Promise((resolve) => setTimeout(resolve, 2500))
    const heard = page.messages.slice(from)
    const batches = heard.flatMap((message) => (message.type === 'samples' ? [message] : []))
    for (const [i, batch] of batches.slice(1).entries()) {
      const before = batches[i]
      expect(batch.first).toBe((before?.first ?? 0) + (before?.times.length ?? 0))
    }
    expect(batches.length).toBeGreaterThan(15)
    const states = heard.filter(({ type }) => type === 'state').length
    expect(states).toBeGreaterThanOrEqual(2)
    expect(states).toBeLessThanOrEqual(12)
    await page.close()
  })

  it('shows the picture of a bench often on its own page, seldom in the hall, and not on the page of another', async () => {
    const own = await connect({ ticket: ticket() })
    const hall = await connect({ ticket: ticket() })
    const other = await connect({ ticket: ticket() })
    own.send({ type: 'present', version: 1, benchId: 'bench-1', input: true })
    other.send({ type: 'present', version: 1, benchId: 'bench-2', input: true })
    const pictures = (page: Page) =>
      page.messages.filter((said) => said.type === 'picture' && said.benchId === 'bench-1').length
    await until('pictures in the hall', () => pictures(hall) >= 3)
    expect(pictures(own)).toBeGreaterThan(2 * pictures(hall))
    expect(pictures(other)).toBe(0)

    await own.close()
    const from = pictures(hall)
    await until('pictures with the hall alone', () => pictures(hall) >= from + 2)
    await hall.close()
    await other.close()
  })

  it('gives a slow watcher fewer samples and every event, and tells how many samples it lost', async () => {
    const slow = await connect({ ticket: ticketOf(people.student) })
    slow.socket.pause()
    // More than the system's buffers hold: refusals are events, and each is kept and sent.
    const text = {
      actor: { ...people.guest, name: 'Guest'.repeat(2000) },
      command: { kind: 'take-controls' },
    }
    const asked = 700
    for (let sent = 0; sent < asked; sent += 10) {
      await Promise.all(
        Array.from({ length: 10 }, () => signedPost(site.address, '/benches/bench-1/commands', text)),
      )
    }
    await new Promise((resolve) => setTimeout(resolve, 1000))
    slow.socket.resume()
    const events = await until('every event', () => {
      const refusals = slow.events().filter(({ personName }) => personName === text.actor.name)
      return refusals.length >= asked ? refusals : null
    })
    expect(new Set(events.map(({ sequence }) => sequence)).size).toBe(asked)
    const dropped = await until('the loss', () => slow.messages.find(({ type }) => type === 'dropped'))
    expect(dropped?.type === 'dropped' ? dropped.samples : 0).toBeGreaterThan(0)
    await slow.close()
  })
})
