import type { Samples } from '#app/protocol/messages.ts'
import { type Channel, type ChannelValues, channels } from '#app/safety/types.ts'

export const ringSeconds = 600

/**
 * The last ten minutes of one bench, a typed array a channel. NaN stands for no reading inside, null outside. Samples
 * are numbered without gaps from 0; the numbers start again with the bridge.
 */
export class SampleRing {
  readonly #capacity: number
  readonly #times: Float64Array
  readonly #values: Record<Channel, Float64Array>
  #count = 0

  constructor(hertz: number) {
    this.#capacity = Math.ceil(ringSeconds * hertz)
    this.#times = new Float64Array(this.#capacity)
    this.#values = Object.fromEntries(
      channels.map((channel) => [channel, new Float64Array(this.#capacity)]),
    ) as Record<Channel, Float64Array>
  }

  /** The number that the next sample gets. */
  get next(): number {
    return this.#count
  }

  get oldest(): number {
    return Math.max(0, this.#count - this.#capacity)
  }

  push(time: number, values: ChannelValues): void {
    const index = this.#count % this.#capacity
    this.#times[index] = time
    for (const channel of channels) this.#values[channel][index] = values[channel] ?? Number.NaN
    this.#count++
  }

  time(sample: number): number {
    return this.#times[sample % this.#capacity] ?? Number.NaN
  }

  value(channel: Channel, sample: number): number | null {
    const value = this.#values[channel][sample % this.#capacity]
    return value === undefined || Number.isNaN(value) ? null : value
  }

  /** The first sample at or after a time. */
  firstSince(time: number): number {
    let sample = this.#count
    while (sample > this.oldest && this.time(sample - 1) >= time) sample--
    return sample
  }

  /** Samples `from` to before `to` as a message. */
  message(benchId: string, from: number, to: number): Samples {
    const numbers = Array.from({ length: Math.max(0, to - from) }, (_, i) => from + i)
    return {
      type: 'samples',
      benchId,
      first: from,
      times: numbers.map((sample) => this.time(sample)),
      values: Object.fromEntries(
        channels.map((channel) => [channel, numbers.map((sample) => this.value(channel, sample))]),
      ),
    }
  }

  /**
   * What happened before sample `to`, one sample of every `step`, for drawing only. A group with a moment without a
   * reading gives null, so that thinning hides no gap. Numbered so as to end right before `to`.
   */
  thinned(benchId: string, to: number, step: number): Samples {
    const ends: number[] = []
    for (let end = to - 1; end - step + 1 >= this.oldest; end -= step) ends.unshift(end)
    const groupValue = (channel: Channel, end: number): number | null => {
      for (let sample = end - step + 1; sample < end; sample++) {
        if (this.value(channel, sample) === null) return null
      }
      return this.value(channel, end)
    }
    return {
      type: 'samples',
      benchId,
      first: to - ends.length,
      times: ends.map((end) => this.time(end)),
      values: Object.fromEntries(
        channels.map((channel) => [channel, ends.map((end) => groupValue(channel, end))]),
      ),
    }
  }
}

const recentSeconds = 60
const thinnedHertz = 1

/** What a page gets of the past when it connects: older minutes at one sample a second, the last one whole. */
export function history(ring: SampleRing, benchId: string, now: number, hertz: number): Samples[] {
  const recent = ring.firstSince(now - recentSeconds)
  const older = ring.thinned(benchId, recent, Math.max(1, Math.round(hertz / thinnedHertz)))
  return [older, ring.message(benchId, recent, ring.next)].filter(({ times }) => times.length > 0)
}
