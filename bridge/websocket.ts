import { randomUUID } from 'node:crypto'
import type { IncomingMessage } from 'node:http'
import type { Duplex } from 'node:stream'
import { type WebSocket, WebSocketServer } from 'ws'
import type { Ticket } from '#app/protocol/commands.ts'
import { fromBrowserSchema, parseMessage, protocolVersion } from '#app/protocol/messages.ts'
import { Allowance } from './allowance.ts'
import type { Bus } from './bus.ts'
import type { Clock } from './clock.ts'
import type { Log } from './log.ts'
import type { Room } from './room.ts'
import { history } from './sampler.ts'
import { readTicket, resumeKeyFor } from './tickets.ts'
import { mayWatch, send, type Watcher, Watchers } from './watchers.ts'

export const telemetryPath = '/telemetry'
const largestMessageBytes = 4096
/** No more than this many sockets at once: a flood of them must not take the memory of the room's guard. */
const mostSockets = 1000
/** A page says a message in two seconds; who says this many at once, and goes on at this rate, is sent away. */
const messagesAtOnce = 40
const messagesPerSecond = 10
const pingSeconds = 1.5
const lookSeconds = 0.25
/** A socket that has not been heard for this long is lost. */
const silentSeconds = 5
const badMessageCode = 1008
const failedCode = 1011
/** The code of a socket that ended without a farewell. */
const abnormalCode = 1006
/** A page that does not answer the closing handshake is cut off after this. */
const farewellSeconds = 0.5
const revokedCode = 4001

type TelemetryOptions = {
  room: Room
  bus: Bus
  clock: Clock
  wallOffsetSeconds: number
  secret: string
  allowedOrigins: readonly string[]
  revokedAt: (personId: string) => number | null
  log: Log
  /** Most sockets at once; a thousand by default. */
  mostSockets?: number
}

export type Telemetry = {
  upgrade(request: IncomingMessage, socket: Duplex, head: Buffer): void
  watchers: Watchers
  /** Ends the connections of a person whose keys were revoked. */
  dismiss(personId: string): void
  close(): void
}

const wallNow = () => Date.now() / 1000

/** The telemetry socket: what the bus tells goes out, presence and make safe come in, and nothing else. */
export function createTelemetry(options: TelemetryOptions): Telemetry {
  const { room, clock } = options
  const server = new WebSocketServer({
    noServer: true,
    maxPayload: largestMessageBytes,
    perMessageDeflate: false,
    clientTracking: false,
  })
  const watchers = new Watchers(clock)
  const unsubscribe = options.bus.subscribe((message) => watchers.publish(message))

  function upgrade(request: IncomingMessage, socket: Duplex, head: Buffer): void {
    socket.on('error', () => socket.destroy())
    if (!options.allowedOrigins.includes(request.headers.origin ?? '')) {
      refuseUpgrade(socket, 403, 'Forbidden', 'This origin may not connect.')
      return
    }
    const url = urlOf(request)
    if (url === null) {
      refuseUpgrade(socket, 400, 'Bad Request', 'The address cannot be read.')
      return
    }
    if (url.pathname !== telemetryPath) {
      refuseUpgrade(socket, 404, 'Not Found', 'There is nothing here.')
      return
    }
    const checked = ticketOf(url, options)
    if (!checked.ok) {
      refuseUpgrade(socket, 401, 'Unauthorized', checked.reason)
      return
    }
    if (watchers.size >= (options.mostSockets ?? mostSockets)) {
      refuseUpgrade(socket, 503, 'Service Unavailable', 'Too many pages watch this room.')
      return
    }
    server.handleUpgrade(request, socket, head, (accepted) => welcome(accepted, checked.ticket))
  }

  function welcome(socket: WebSocket, ticket: Ticket): void {
    const watcher: Watcher = {
      socket,
      ticket,
      pageId: randomUUID(),
      lastHeardAt: clock.now(),
      benchId: null,
      lostSamples: 0,
      picturedAt: new Map(),
    }
    const allowance = new Allowance(messagesAtOnce, messagesPerSecond, clock)
    const benches = room.benches().filter(({ benchId }) => mayWatch(ticket, benchId))
    send(watcher, {
      type: 'hello',
      version: protocolVersion,
      wallOffsetSeconds: options.wallOffsetSeconds,
      personId: ticket.personId,
      pageId: watcher.pageId,
      resumeKey: resumeKeyFor(options.secret, ticket, wallNow()),
      benchIds: benches.map(({ benchId }) => benchId),
    })
    for (const bench of benches) {
      send(watcher, { type: 'state', state: bench.state() })
      const { apparatus } = bench
      if (!apparatus) continue
      for (const samples of history(apparatus.ring, bench.benchId, clock.now(), apparatus.hertz)) {
        send(watcher, samples)
      }
    }
    watchers.add(watcher)
    socket.on('message', (data, isBinary) => {
      // Of a page that was sent away nothing counts any more.
      if (!watchers.has(watcher)) return
      if (!allowance.take()) end(watcher, badMessageCode, 'Too many messages: reload the page.')
      else hear(watcher, isBinary ? null : data.toString())
    })
    socket.on('pong', () => {
      watcher.lastHeardAt = clock.now()
    })
    socket.on('error', (error) => options.log.warn({ error: String(error) }, 'A telemetry socket failed'))
    socket.on('close', (code) => forget(watcher, code === abnormalCode ? watcher.lastHeardAt : clock.now()))
  }

  /** Says why, and is rid of the page whether or not it answers the farewell. */
  function end(watcher: Watcher, code: number, reason: string): void {
    send(watcher, { type: 'bye', reason })
    watcher.socket.close(code)
    forget(watcher, clock.now())
    setTimeout(() => watcher.socket.terminate(), farewellSeconds * 1000).unref()
  }

  function forget(watcher: Watcher, lastHeardAt: number): void {
    watchers.remove(watcher)
    for (const bench of room.benches()) bench.controls.pageGone(watcher.pageId, lastHeardAt)
  }

  const failed = (error: unknown) => options.log.error({ error: String(error) }, 'A message of a page failed')

  /** Whatever a page says, it must not end the bridge. */
  function hear(watcher: Watcher, text: string | null): void {
    watcher.lastHeardAt = clock.now()
    try {
      heed(watcher, text)
    } catch (error) {
      failed(error)
      end(watcher, failedCode, 'The bridge failed to understand this page: reload it.')
    }
  }

  function heed(watcher: Watcher, text: string | null): void {
    const parsed =
      text === null
        ? { ok: false as const, reason: 'Only text is understood here.' }
        : parseMessage(fromBrowserSchema, text)
    if (!parsed.ok) {
      end(watcher, badMessageCode, parsed.reason)
      return
    }
    const { message } = parsed
    if (message.type === 'present') notePresence(watcher, message.benchId, message.input)
    else room.makeSafeFromPage(watcher.ticket, message.benchId).catch(failed)
  }

  function notePresence(watcher: Watcher, benchId: string, hadInput: boolean): void {
    const bench = room.bench(benchId)
    if (!bench || !mayWatch(watcher.ticket, benchId)) return
    if (watcher.benchId !== benchId && watcher.benchId !== null) {
      room.bench(watcher.benchId)?.controls.pageGone(watcher.pageId, clock.now())
    }
    watcher.benchId = benchId
    bench.controls.pagePresent(watcher.pageId, watcher.ticket.personId, hadInput)
  }

  let pingedAt = clock.now()
  const timer = setInterval(() => {
    const now = clock.now()
    const isPingDue = now - pingedAt >= pingSeconds
    if (isPingDue) pingedAt = now
    for (const watcher of watchers) {
      if (now - watcher.lastHeardAt > silentSeconds) {
        forget(watcher, watcher.lastHeardAt)
        watcher.socket.terminate()
      } else if (isPingDue && watcher.socket.readyState === watcher.socket.OPEN) {
        watcher.socket.ping()
      }
    }
  }, lookSeconds * 1000)

  return {
    upgrade,
    watchers,
    dismiss(personId) {
      for (const watcher of watchers) {
        if (watcher.ticket.personId === personId)
          end(watcher, revokedCode, 'You have been signed out: sign in again.')
      }
    },
    close() {
      clearInterval(timer)
      unsubscribe()
      for (const watcher of watchers) end(watcher, 1001, 'The bridge is being stopped.')
      server.close()
    },
  }
}

function urlOf(request: IncomingMessage): URL | null {
  try {
    return new URL(request.url ?? '/', 'http://bridge')
  } catch {
    return null
  }
}

function ticketOf(url: URL, { secret, revokedAt }: TelemetryOptions): ReturnType<typeof readTicket> {
  for (const use of ['ticket', 'resume'] as const) {
    const text = url.searchParams.get(use)
    if (text !== null) return readTicket(text, { secret, use, now: wallNow(), revokedAt })
  }
  return { ok: false, reason: 'A ticket is needed to connect.' }
}

function refuseUpgrade(socket: Duplex, status: number, words: string, reason: string): void {
  const body = `${JSON.stringify({ reason })}\n`
  socket.end(
    `HTTP/1.1 ${status} ${words}\r\nContent-Type: application/json\r\nContent-Length: ${Buffer.byteLength(body)}\r\nConnection: close\r\n\r\n${body}`,
  )
}
