import type { Clock } from './clock.ts'

/** So many at once, and refilled at a rate. */
export class Allowance {
  readonly #most: number
  readonly #perSecond: number
  readonly #clock: Clock
  #left: number
  #at: number

  constructor(most: number, perSecond: number, clock: Clock) {
    this.#most = most
    this.#perSecond = perSecond
    this.#clock = clock
    this.#left = most
    this.#at = clock.now()
  }

  take(): boolean {
    const now = this.#clock.now()
    this.#left = Math.min(this.#most, this.#left + (now - this.#at) * this.#perSecond)
    this.#at = now
    if (this.#left < 1) return false
    this.#left--
    return true
  }
}
