import type { Samples } from '#app/protocol/messages.ts'
import { type Channel, channels } from '#app/safety/types.ts'

/** Ten minutes at the fastest rate that a bench may sample with. */
export const ringCapacity = 10 * 60 * 50

/** A slice of one channel for drawing: seconds relative to the newest moment asked for, null where nothing was read. */
export type Trace = { seconds: number[]; values: (number | null)[] }

/**
 * The last samples of all channels of one bench, in arrays of a fixed size. A moment without a reading is kept as NaN
 * and handed out as null, so that no line is ever drawn across it.
 */
export class RingBuffer {
  readonly #times: Float64Array
  readonly #values: Record<Channel, Float32Array>
  readonly #capacity: number
  #head = 0
  #count = 0
  #next: number | null = null

  constructor(capacity = ringCapacity) {
    this.#capacity = capacity
    this.#times = new Float64Array(capacity)
    this.#values = Object.fromEntries(
      channels.map((channel) => [channel, new Float32Array(capacity)]),
    ) as Record<Channel, Float32Array>
  }

  get count(): number {
    return this.#count
  }

  /** Wall-clock seconds of the newest sample. */
  get newestSeconds(): number | null {
    return this.#count ? this.#at(this.#count - 1) : null
  }

  /**
   * Adds a batch. Samples already held (a snapshot after a reconnection repeats them) are passed over; where numbers are
   * missing, an empty moment is put between, which draws as a gap.
   */
  add(batch: Samples, wallOffsetSeconds: number): void {
    for (let i = 0; i < batch.times.length; i++) {
      const seconds = (batch.times[i] ?? Number.NaN) + wallOffsetSeconds
      const newest = this.newestSeconds
      if (!Number.isFinite(seconds) || (newest !== null && seconds <= newest + 1e-6)) continue
      const number = batch.first + i
      if (newest !== null && number !== this.#next) this.#push((newest + seconds) / 2, () => null)
      this.#push(seconds, (channel) => batch.values[channel]?.[i] ?? null)
      this.#next = number + 1
    }
  }

  /** The newest value of a channel that is not a gap, with its wall-clock seconds. */
  latest(channel: Channel): { value: number | null; seconds: number } | null {
    if (!this.#count) return null
    const value = this.#valueAt(channel, this.#count - 1)
    return { value, seconds: this.#at(this.#count - 1) }
  }

  /** Fills `into` with the samples of the `span` seconds before `end`; x counts from `end`, so that the newest is near 0. */
  read(channel: Channel, end: number, span: number, into: Trace): void {
    let first = this.#count
    while (first > 0 && this.#at(first - 1) >= end - span) first--
    const size = this.#count - first
    into.seconds.length = size
    into.values.length = size
    for (let i = 0; i < size; i++) {
      into.seconds[i] = this.#at(first + i) - end
      into.values[i] = this.#valueAt(channel, first + i)
    }
  }

  #push(seconds: number, value: (channel: Channel) => number | null): void {
    const slot = (this.#head + this.#count) % this.#capacity
    this.#times[slot] = seconds
    for (const channel of channels) this.#values[channel][slot] = value(channel) ?? Number.NaN
    if (this.#count < this.#capacity) this.#count++
    else this.#head = (this.#head + 1) % this.#capacity
  }

  #at(index: number): number {
    return this.#times[(this.#head + index) % this.#capacity] ?? Number.NaN
  }

  #valueAt(channel: Channel, index: number): number | null {
    const value = this.#values[channel][(this.#head + index) % this.#capacity]
    return value === undefined || Number.isNaN(value) ? null : value
  }
}
