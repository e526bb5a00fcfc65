import type { Summary } from '#app/protocol/commands.ts'
import { type Channel, type ChannelValues, channels } from '#app/safety/types.ts'

export type UnnumberedSummary = Omit<Summary, 'sequence'>

type Sums = { min: number; max: number; sum: number; count: number }

/** Min, mean and max of each channel over each whole second of wall-clock time. A channel without a reading has no row. */
export class Recorder {
  readonly #benchId: string
  readonly #onSecond: (summaries: UnnumberedSummary[]) => void
  #second: number | null = null
  #sums = new Map<Channel, Sums>()

  constructor(benchId: string, onSecond: (summaries: UnnumberedSummary[]) => void) {
    this.#benchId = benchId
    this.#onSecond = onSecond
  }

  add(wallSeconds: number, values: ChannelValues): void {
    const second = Math.floor(wallSeconds)
    if (second !== this.#second) this.flush()
    this.#second = second
    for (const channel of channels) {
      const value = values[channel]
      if (value === null) continue
      const sums = this.#sums.get(channel)
      if (!sums) {
        this.#sums.set(channel, { min: value, max: value, sum: value, count: 1 })
        continue
      }
      sums.min = Math.min(sums.min, value)
      sums.max = Math.max(sums.max, value)
      sums.sum += value
      sums.count++
    }
  }

  /** Ends the second that is being summed. */
  flush(): void {
    if (this.#second === null || this.#sums.size === 0) return
    const second = this.#second
    const summaries = [...this.#sums].map(([channel, { min, max, sum, count }]) => ({
      benchId: this.#benchId,
      second,
      channel,
      min,
      // Rounding may carry a mean of equal values past them.
      mean: Math.min(max, Math.max(min, sum / count)),
      max,
      count,
    }))
    this.#sums = new Map()
    this.#second = null
    this.#onSecond(summaries)
  }
}
