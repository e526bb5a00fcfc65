import type { WebSocket } from 'ws'
import type { Ticket } from '#app/protocol/commands.ts'
import type { FromBridge } from '#app/protocol/messages.ts'
import { type BusMessage, benchIdOf } from './bus.ts'

/** Above this a watcher loses samples, pictures and states; the next state tells it all of that again. */
const slowBytes = 512 * 1024
/** Above this it is given up: it would have to hold all events that are still to come. */
const hopelessBytes = 4 * 1024 * 1024

export type Watcher = {
  socket: WebSocket
  ticket: Ticket
  pageId: string
  lastHeardAt: number
  /** The bench whose page this is, as the page said. */
  benchId: string | null
  lostSamples: number
}

export const mayWatch = (ticket: Ticket, benchId: string): boolean =>
  ticket.benchIds === null || ticket.benchIds.includes(benchId)

/** All who watch. A message is encoded once, and the same bytes go to each. */
export class Watchers {
  readonly #watchers = new Set<Watcher>()

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

  /** Whether somebody has this bench's own page open: its picture is wanted. */
  isOpen(benchId: string): boolean {
    for (const watcher of this.#watchers) if (wantsPicture(watcher, benchId)) return true
    return false
  }

  /** Room-wide events go to everybody. */
  publish(message: BusMessage): void {
    const benchId = benchIdOf(message)
    let bytes: Buffer | null = null
    for (const watcher of this.#watchers) {
      if (benchId !== null && !mayWatch(watcher.ticket, benchId)) continue
      if (message.type === 'picture' && !wantsPicture(watcher, message.benchId)) continue
      bytes ??= encode(message)
      this.#sendTo(watcher, message, bytes)
    }
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

function wantsPicture({ ticket, benchId: own }: Watcher, benchId: string): boolean {
  return own === benchId || (ticket.benchIds?.length === 1 && ticket.benchIds[0] === benchId)
}
