import { requireFinite, requirePositive } from './domain.ts'

/**
 * Mean, standard deviation, slope against time and lag-1 autocorrelation of the residuals about that line,
 * over the samples of the last so many seconds. A sample costs constant time on average: sums are added to
 * and taken from, and formed anew from the samples kept once as many have left as are inside, so that
 * rounding errors do not pile up.
 */
export class SlidingWindow {
  readonly windowSeconds: number
  #times = new Float64Array(64)
  #values = new Float64Array(64)
  #start = 0
  #count = 0
  #left = 0
  #timeOrigin = 0
  #valueOrigin = 0
  #sums = emptySums()

  /** @throws RangeError naming `windowSeconds` */
  constructor(windowSeconds: number) {
    requirePositive('windowSeconds', windowSeconds)
    this.windowSeconds = windowSeconds
  }

  get count(): number {
    return this.#count
  }

  /** Time of the newest sample, null while there is none. */
  get lastSeconds(): number | null {
    return this.#count === 0 ? null : this.#time(this.#count - 1)
  }

  /**
   * Adds a sample and drops those that are older than the window.
   *
   * @throws RangeError naming `timeSeconds` (not finite, or before the last one) or `value`
   */
  add(timeSeconds: number, value: number): void {
    requireFinite('timeSeconds', timeSeconds)
    requireFinite('value', value)
    const last = this.lastSeconds
    if (last !== null && timeSeconds < last) {
      throw new RangeError(`timeSeconds must not be before the last sample at ${last}, got ${timeSeconds}`)
    }
    if (this.#count === 0) {
      this.#timeOrigin = timeSeconds
      this.#valueOrigin = value
    }
    if (this.#count === this.#times.length) this.#grow()
    const slot = (this.#start + this.#count) % this.#times.length
    this.#times[slot] = timeSeconds
    this.#values[slot] = value
    this.#count += 1
    this.#account(this.#count - 1, 1)
    if (this.#count > 1) this.#accountPair(this.#count - 2, 1)
    while (this.#time(0) < timeSeconds - this.windowSeconds) this.#dropFirst()
    if (this.#left >= this.#count) this.#rebuild()
  }

  reset(): void {
    this.#start = 0
    this.#count = 0
    this.#left = 0
    this.#sums = emptySums()
  }

  /** Values inside the window, oldest first. */
  values(): Float64Array {
    return Float64Array.from({ length: this.#count }, (_, i) => this.#rawValue(i))
  }

  /** @throws RangeError naming `count` while the window is empty */
  get mean(): number {
    this.#require(1)
    return this.#valueOrigin + this.#sums.v / this.#count
  }

  /** @throws RangeError naming `count` with fewer than two samples */
  get standardDeviation(): number {
    this.#require(2)
    return Math.sqrt(this.#centred().vv / (this.#count - 1))
  }

  /**
   * The least-squares line through the samples: slope a second, sum of squared residuals, sum of squared
   * times about their mean, and lag-1 autocorrelation of the residuals (0 where there are none).
   *
   * @throws RangeError naming `count` with fewer than two samples
   */
  get trend(): { slope: number; residualSquares: number; timeSquares: number; residualLag1: number } {
    this.#require(2)
    const { tt, tv, vv, meanTime, meanValue } = this.#centred()
    const slope = tt > 0 ? tv / tt : 0
    const residualSquares = Math.max(0, vv - slope * tv)
    return {
      slope,
      residualSquares,
      timeSquares: tt,
      residualLag1: this.#residualLag1(slope, meanValue - slope * meanTime, residualSquares, vv),
    }
  }

  #residualLag1(slope: number, intercept: number, residualSquares: number, variation: number): number {
    // Below this the residuals are the rounding errors of the sums.
    if (residualSquares <= 1e-13 * variation) return 0
    const { v, t, pairVV, pairVT, pairTT } = this.#sums
    const last = this.#count - 1
    const twoV = 2 * v - this.#value(0) - this.#value(last)
    const twoT = 2 * t - this.#relativeTime(0) - this.#relativeTime(last)
    const products =
      pairVV -
      intercept * twoV -
      slope * pairVT +
      last * intercept * intercept +
      intercept * slope * twoT +
      slope * slope * pairTT
    return Math.min(1, Math.max(-1, products / residualSquares))
  }

  #centred() {
    const { t, v, tt, tv, vv } = this.#sums
    const n = this.#count
    return {
      tt: Math.max(0, tt - (t * t) / n),
      tv: tv - (t * v) / n,
      vv: Math.max(0, vv - (v * v) / n),
      meanTime: t / n,
      meanValue: v / n,
    }
  }

  #time(index: number): number {
    return this.#times[(this.#start + index) % this.#times.length] as number
  }

  #relativeTime(index: number): number {
    return this.#time(index) - this.#timeOrigin
  }

  #rawValue(index: number): number {
    return this.#values[(this.#start + index) % this.#values.length] as number
  }

  #value(index: number): number {
    return this.#rawValue(index) - this.#valueOrigin
  }

  #account(index: number, sign: 1 | -1): void {
    const t = this.#relativeTime(index)
    const v = this.#value(index)
    const sums = this.#sums
    sums.t += sign * t
    sums.v += sign * v
    sums.tt += sign * t * t
    sums.tv += sign * t * v
    sums.vv += sign * v * v
  }

  #accountPair(index: number, sign: 1 | -1): void {
    const [t1, v1] = [this.#relativeTime(index), this.#value(index)]
    const [t2, v2] = [this.#relativeTime(index + 1), this.#value(index + 1)]
    const sums = this.#sums
    sums.pairVV += sign * v1 * v2
    sums.pairVT += sign * (v1 * t2 + t1 * v2)
    sums.pairTT += sign * t1 * t2
  }

  #dropFirst(): void {
    this.#accountPair(0, -1)
    this.#account(0, -1)
    this.#start = (this.#start + 1) % this.#times.length
    this.#count -= 1
    this.#left += 1
  }

  #rebuild(): void {
    this.#left = 0
    const last = this.#count - 1
    this.#timeOrigin = this.#time(last)
    this.#valueOrigin = this.#rawValue(last)
    this.#sums = emptySums()
    for (let i = 0; i <= last; i++) {
      this.#account(i, 1)
      if (i > 0) this.#accountPair(i - 1, 1)
    }
  }

  #grow(): void {
    const times = new Float64Array(this.#times.length * 2)
    const values = new Float64Array(times.length)
    for (let i = 0; i < this.#count; i++) {
      times[i] = this.#time(i)
      values[i] = this.#rawValue(i)
    }
    this.#times = times
    this.#values = values
    this.#start = 0
  }

  #require(least: number): void {
    if (this.#count < least) throw new RangeError(`count must be at least ${least}, is ${this.#count}`)
  }
}

function emptySums() {
  return { t: 0, v: 0, tt: 0, tv: 0, vv: 0, pairVV: 0, pairVT: 0, pairTT: 0 }
}
