import type { WebSocket } from 'ws'
import type { Ticket } from '#app/protocol/commands.ts'
import type { FromBridge } from '#app/protocol/messages.ts'
import { type BusMessage, benchIdOf } from './bus.ts'
import type { Clock } from './clock.ts'

/** Above this a watcher loses samples, pictures and states; the next state tells it all of that again. */
const slowBytes = 512 * 1024
/** Above this it is given up: it would have to hold all events that are still to come. */
const hopelessBytes = 4 * 1024 * 1024

/** Between two pictures of a bench: on its own page, and on a page that looks at several. */
const ownPictureSeconds = 0.2
const hallPictureSeconds = 1
/** Pictures come with the jitter of a timer. */
const jitter = 0.8

export type Watcher = {
  socket: WebSocket
  ticket: Ticket
  pageId: string
  lastHeardAt: number
  /** The bench whose page this is, as the page said. */
  benchId: string | null
  lostSamples: number
  /** When it was last sent a picture of each bench. */
  picturedAt: Map<string, number>
}

export const mayWatch = (ticket: Ticket, benchId: string): boolean =>
  ticket.benchIds === null || ticket.benchIds.includes(benchId)

/** All who watch. A message is encoded once, and the same bytes go to each. */
export class Watchers {
  readonly #watchers = new Set<Watcher>()
  readonly #clock: Clock

  constructor(clock: Clock) {
    this.#clock = clock
  }

  add(watcher: Watcher): void {
    this.#watchers.add(watcher)
  }

  remove(watcher: Watcher): void {
    this.#watchers.delete(watcher)
  }

  has(watcher: Watcher): boolean {
    return this.#watchers.has(watcher)
  }

  get size(): number {
    return this.#watchers.size
  }

  [Symbol.iterator](): Iterator<Watcher> {
    return this.#watchers.values()
  }

  /** Seconds between two pictures of a bench that somebody looks at, null when nobody does. */
  pictureSeconds(benchId: string): number | null {
    let shortest: number | null = null
    for (const watcher of this.#watchers) {
      const seconds = mayWatch(watcher.ticket, benchId) ? pictureSecondsOf(watcher, benchId) : null
      if (seconds !== null && (shortest === null || seconds < shortest)) shortest = seconds
    }
    return shortest
  }

  /** Room-wide events go to everybody. */
  publish(message: BusMessage): void {
    const benchId = benchIdOf(message)
    let bytes: Buffer | null = null
    for (const watcher of this.#watchers) {
      if (benchId !== null && !mayWatch(watcher.ticket, benchId)) continue
      if (message.type === 'picture' && !this.#isPictureDue(watcher, message.benchId)) continue
      bytes ??= encode(message)
      this.#sendTo(watcher, message, bytes)
    }
  }

  #isPictureDue(watcher: Watcher, benchId: string): boolean {
    const seconds = pictureSecondsOf(watcher, benchId)
    const now = this.#clock.now()
    const last = watcher.picturedAt.get(benchId) ?? Number.NEGATIVE_INFINITY
    if (seconds === null || now - last < jitter * seconds) return false
    watcher.picturedAt.set(benchId, now)
    return true
  }

  #sendTo(watcher: Watcher, message: BusMessage, bytes: Buffer): void {
    const { socket } = watcher
    if (socket.readyState !== socket.OPEN) return
    if (socket.bufferedAmount > hopelessBytes) {
      socket.terminate()
      return
    }
    if (message.type !== 'event' && socket.bufferedAmount > slowBytes) {
      if (message.type === 'samples') watcher.lostSamples += message.times.length
      return
    }
    if (watcher.lostSamples > 0) {
      socket.send(encode({ type: 'dropped', samples: watcher.lostSamples }), textFrame)
      watcher.lostSamples = 0
    }
    socket.send(bytes, textFrame)
  }
}

const textFrame = { binary: false }

/** Sends to one watcher alone. */
export function send(watcher: Watcher, message: FromBridge): void {
  if (watcher.socket.readyState === watcher.socket.OPEN) watcher.socket.send(encode(message), textFrame)
}

const encode = (message: FromBridge): Buffer => Buffer.from(JSON.stringify(message))

/** A page that said which bench is its own looks at no other. */
function pictureSecondsOf({ ticket, benchId: own }: Watcher, benchId: string): number | null {
  if (own === benchId || ticket.benchIds?.length === 1) return ownPictureSeconds
  return own === null ? hallPictureSeconds : null
}
