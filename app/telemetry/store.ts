import {
  type BenchEvent,
  type BenchState,
  type FromBridge,
  fromBridgeSchema,
  type Picture,
  parseMessage,
} from '#app/protocol/messages.ts'
import { type Channel, channels } from '#app/safety/types.ts'
import { RingBuffer } from './ring-buffer.ts'

/** `since` is seconds of this browser's clock. */
export type Link =
  | { kind: 'connecting' }
  | { kind: 'connected' }
  | { kind: 'reconnecting'; since: number; reason: string | null }
  | { kind: 'refused'; reason: string }

export type MakeSafeReport = { state: 'sent' | 'answered' | 'failed'; sentence: string }

/** `seconds` is wall-clock time of the bridge. A null value is no reading. */
export type Latest = { value: number | null; seconds: number }

const eventsKept = 50
/** Figures change at most this often, so that they can be read. */
const figureMilliseconds = 250

type BenchRecord = {
  state: BenchState | null
  picture: Picture | null
  events: BenchEvent[]
  ring: RingBuffer
  figures: Map<Channel, Latest>
}

const noEvents: BenchEvent[] = []

/** What the bridge has told this page, outside React. Topics are 'link', 'safe', or `<what>:<benchId>`. */
export class TelemetryStore {
  #link: Link = { kind: 'connecting' }
  #report: MakeSafeReport | null = null
  #droppedSamples = 0
  #lastEvent: BenchEvent | null = null
  #benches = new Map<string, BenchRecord>()
  #listeners = new Map<string, Set<() => void>>()
  #wallOffset = 0
  /** This browser's clock less the bridge's, by the quickest message yet; the least one is the closest. */
  #clockAhead: number | null = null
  #stirred = new Set<string>()
  #timer: ReturnType<typeof setTimeout> | null = null
  resumeKey: string | null = null

  subscribe(topic: string, listener: () => void): () => void {
    const set = this.#listeners.get(topic) ?? new Set()
    this.#listeners.set(topic, set.add(listener))
    return () => set.delete(listener)
  }

  link = () => this.#link
  report = () => this.#report
  droppedSamples = () => this.#droppedSamples
  lastEvent = () => this.#lastEvent
  state = (benchId: string) => this.#benches.get(benchId)?.state ?? null
  picture = (benchId: string) => this.#benches.get(benchId)?.picture ?? null
  events = (benchId: string) => this.#benches.get(benchId)?.events ?? noEvents
  latest = (benchId: string, channel: Channel) => this.#benches.get(benchId)?.figures.get(channel) ?? null
  ring = (benchId: string) => this.#bench(benchId).ring

  /** Seconds since 1970 by the bridge's clock, as well as this browser can tell. */
  bridgeSeconds(): number {
    return Date.now() / 1000 - (this.#clockAhead ?? 0)
  }

  setLink(link: Link): void {
    const now = this.#link
    // The time at which the link was lost stays, however many tries follow.
    if (link.kind === 'reconnecting' && now.kind === 'reconnecting')
      this.#link = { ...now, reason: link.reason ?? now.reason }
    else this.#link = link
    this.#tell('link')
  }

  setReport(report: MakeSafeReport | null): void {
    this.#report = report
    this.#tell('safe')
  }

  /** Takes one message of the bridge. Returns it, or the reason why it is not understood. */
  receive(text: string): { ok: true; message: FromBridge } | { ok: false; reason: string } {
    const parsed = parseMessage(fromBridgeSchema, text)
    if (parsed.ok) this.#take(parsed.message)
    return parsed
  }

  #take(message: FromBridge): void {
    switch (message.type) {
      case 'hello':
        this.#wallOffset = message.wallOffsetSeconds
        this.#clockAhead = null
        this.resumeKey = message.resumeKey
        this.setLink({ kind: 'connected' })
        // What could not be delivered is old news once the bench itself can be heard again.
        if (this.#report?.state === 'failed') this.setReport(null)
        break
      case 'samples': {
        const bench = this.#bench(message.benchId)
        bench.ring.add(message, this.#wallOffset)
        const newest = bench.ring.newestSeconds
        if (newest !== null) {
          const ahead = Date.now() / 1000 - newest
          if (this.#clockAhead === null || ahead < this.#clockAhead) this.#clockAhead = ahead
        }
        this.#stir(message.benchId)
        break
      }
      case 'state': {
        const bench = this.#bench(message.state.benchId)
        bench.state = message.state
        this.#tell(`state:${message.state.benchId}`)
        break
      }
      case 'picture':
        this.#bench(message.benchId).picture = message
        this.#tell(`picture:${message.benchId}`)
        break
      case 'event':
        this.#takeEvent(message.event)
        break
      case 'dropped':
        this.#droppedSamples += message.samples
        this.#tell('link')
        break
      case 'bye':
        this.setLink({ kind: 'reconnecting', since: Date.now() / 1000, reason: message.reason })
    }
  }

  #takeEvent(event: BenchEvent): void {
    const benchIds = event.benchId === null ? [...this.#benches.keys()] : [event.benchId]
    for (const benchId of benchIds) {
      const bench = this.#bench(benchId)
      if (bench.events.some(({ sequence }) => sequence === event.sequence)) continue
      bench.events = [...bench.events, event].sort((a, b) => b.sequence - a.sequence).slice(0, eventsKept)
      this.#tell(`events:${benchId}`)
    }
    this.#lastEvent = event
    this.#tell('event')
  }

  #bench(benchId: string): BenchRecord {
    let bench = this.#benches.get(benchId)
    if (!bench) {
      bench = { state: null, picture: null, events: noEvents, ring: new RingBuffer(), figures: new Map() }
      this.#benches.set(benchId, bench)
    }
    return bench
  }

  #stir(benchId: string): void {
    this.#stirred.add(benchId)
    this.#timer ??= setTimeout(() => {
      this.#timer = null
      for (const id of this.#stirred) {
        const { ring, figures } = this.#bench(id)
        for (const channel of channels) {
          const latest = ring.latest(channel)
          if (latest) figures.set(channel, latest)
        }
        this.#tell(`figures:${id}`)
      }
      this.#stirred.clear()
    }, figureMilliseconds)
  }

  #tell(topic: string): void {
    for (const listener of this.#listeners.get(topic) ?? []) listener()
  }
}
