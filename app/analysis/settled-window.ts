import { studentUpperTail } from '#app/statistics/distributions.ts'
import { requireFinite, requireNotNegative, requirePositive } from '#app/statistics/domain.ts'
import { SlidingWindow } from '#app/statistics/sliding-window.ts'

export { type WindowStatistics, windowStatistics } from './window-statistics.ts'

export type ChannelState = 'settling' | 'settled' | 'drifting' | 'noisy' | 'stale'

export type ChannelStatus = {
  state: ChannelState
  /** why, as half a sentence without the channel's name */
  reason: string
  /** null without a sample in the window */
  mean: number | null
  /** null with fewer than two samples */
  standardDeviation: number | null
  driftPerSecond: number | null
  count: number
}

export type ChannelTolerance = {
  /** length of the window that is judged, default 5 s */
  windowSeconds?: number
  /** how long the window must have been within tolerance */
  holdSeconds: number
  /** without a sample for longer than this a channel is stale, default 1 s */
  sampleTimeoutSeconds?: number
  /** largest standard deviation inside the window, in the channel's unit */
  toleranceDeviation: number
  /** largest change along the fitted line over one window, in the channel's unit */
  toleranceDrift: number
}

/** A difference in the channel's unit, as the reasons state it. */
export type InWords = (difference: number) => string

/** Two-sided 5 %: a slope counts as a drift only where chance gives a steeper one more rarely. */
const SIGNIFICANCE = 0.05
/**
 * A bend leaves residuals that follow each other closely, as noise of long memory does. With fewer
 * effective samples than this no bend would ever count as a drift.
 */
const LEAST_EFFECTIVE_SAMPLES = 5

/**
 * Watches one live channel: is its window settled, and if not, why. Constant cost a sample.
 *
 * stale: no sample for the timeout. settling: the window is not full yet, or not within tolerance for the
 * hold time, or its drift is out of tolerance but may be chance. drifting: the drift over the window is
 * out of tolerance and significant (t test, the number of samples reduced by the lag-1 autocorrelation of
 * the residuals). noisy: the standard deviation is out of tolerance.
 */
export class ChannelWatch {
  readonly tolerance: Required<ChannelTolerance>
  readonly #inWords: InWords
  #window: SlidingWindow
  #startedSeconds: number | null = null
  #insideSinceSeconds: number | null = null

  /** @throws RangeError naming the option */
  constructor(tolerance: ChannelTolerance, inWords: InWords = short) {
    const complete = { windowSeconds: 5, sampleTimeoutSeconds: 1, ...tolerance }
    requirePositive('windowSeconds', complete.windowSeconds)
    requireNotNegative('holdSeconds', complete.holdSeconds)
    requirePositive('sampleTimeoutSeconds', complete.sampleTimeoutSeconds)
    requireNotNegative('toleranceDeviation', complete.toleranceDeviation)
    requireNotNegative('toleranceDrift', complete.toleranceDrift)
    this.tolerance = complete
    this.#inWords = inWords
    this.#window = new SlidingWindow(complete.windowSeconds)
  }

  /**
   * Adds a sample. `null` is a sample that did not arrive: it is no value, and when samples stay away for
   * the timeout the window starts anew with the next one, so that none reaches across a gap.
   *
   * @throws RangeError naming `timeSeconds` (not finite, or before the last sample) or `value`
   */
  add(timeSeconds: number, value: number | null): void {
    requireFinite('timeSeconds', timeSeconds)
    if (value === null) return
    requireFinite('value', value)
    const last = this.#window.lastSeconds
    if (last !== null && timeSeconds - last > this.tolerance.sampleTimeoutSeconds) this.reset()
    this.#window.add(timeSeconds, value)
    this.#startedSeconds ??= timeSeconds
    if (!this.#isFull() || !this.#isInside()) this.#insideSinceSeconds = null
    else this.#insideSinceSeconds ??= timeSeconds
  }

  /** Forgets everything, as after a change of setpoint. */
  reset(): void {
    this.#window.reset()
    this.#startedSeconds = null
    this.#insideSinceSeconds = null
  }

  /** Values inside the window, oldest first. */
  values(): Float64Array {
    return this.#window.values()
  }

  /** @throws RangeError naming `nowSeconds` */
  status(nowSeconds: number): ChannelStatus {
    requireFinite('nowSeconds', nowSeconds)
    const window = this.#window
    const { count } = window
    const trend = count > 1 ? window.trend : null
    const figures = {
      mean: count > 0 ? window.mean : null,
      standardDeviation: count > 1 ? window.standardDeviation : null,
      driftPerSecond: trend && trend.timeSquares > 0 ? trend.slope : null,
      count,
    }
    return { ...this.#judge(nowSeconds), ...figures }
  }

  #judge(nowSeconds: number): { state: ChannelState; reason: string } {
    const { windowSeconds, holdSeconds, sampleTimeoutSeconds, toleranceDeviation, toleranceDrift } =
      this.tolerance
    const inWords = this.#inWords
    const last = this.#window.lastSeconds
    if (last === null) return { state: 'stale', reason: 'no sample yet' }
    if (nowSeconds - last > sampleTimeoutSeconds) {
      return { state: 'stale', reason: `no sample for ${short(nowSeconds - last)} s` }
    }
    if (!this.#isFull()) {
      const seconds = last - (this.#startedSeconds ?? last)
      const [whole, needed] = [Math.floor(seconds), short(windowSeconds)]
      return { state: 'settling', reason: `watched for ${whole} of ${needed} s` }
    }
    const deviation = this.#window.standardDeviation
    const drift = Math.abs(this.#window.trend.slope) * windowSeconds
    if (drift > toleranceDrift && this.#isSlopeSignificant()) {
      const perMinute = this.#window.trend.slope * 60
      return {
        state: 'drifting',
        reason: `${perMinute > 0 ? 'rises' : 'falls'} ${inWords(Math.abs(perMinute))} per minute`,
      }
    }
    if (deviation > toleranceDeviation) {
      return {
        state: 'noisy',
        reason: `standard deviation ${inWords(deviation)}, ${inWords(toleranceDeviation)} allowed`,
      }
    }
    if (drift > toleranceDrift) {
      return { state: 'settling', reason: `${inWords(drift)} of change may be chance` }
    }
    const held = last - (this.#insideSinceSeconds ?? last)
    // The times are sums of steps that are not exact.
    if (held < holdSeconds * (1 - 1e-9)) {
      const [whole, needed] = [Math.floor(held), short(holdSeconds)]
      return { state: 'settling', reason: `steady for ${whole} of ${needed} s` }
    }
    return { state: 'settled', reason: `± ${inWords(deviation)} over ${short(windowSeconds)} s` }
  }

  #isFull(): boolean {
    const { lastSeconds } = this.#window
    if (lastSeconds === null || this.#startedSeconds === null || this.#window.count < 3) return false
    return lastSeconds - this.#startedSeconds >= this.tolerance.windowSeconds * (1 - 1e-9)
  }

  #isInside(): boolean {
    const { toleranceDeviation, toleranceDrift, windowSeconds } = this.tolerance
    return (
      this.#window.standardDeviation <= toleranceDeviation &&
      Math.abs(this.#window.trend.slope) * windowSeconds <= toleranceDrift
    )
  }

  #isSlopeSignificant(): boolean {
    const { count } = this.#window
    const { slope, residualSquares, timeSquares, residualLag1 } = this.#window.trend
    if (slope === 0) return false
    if (residualSquares === 0) return true
    // Source of the reduction: a first-order autoregressive process.
    const positive = Math.min(Math.max(residualLag1, 0), 0.999)
    const reduced = (count * (1 - positive)) / (1 + positive)
    const effective = Math.min(count, Math.max(reduced, LEAST_EFFECTIVE_SAMPLES))
    const freedom = effective - 2
    if (!(freedom > 0)) return false
    const slopeError = Math.sqrt(residualSquares / freedom / timeSquares)
    return studentUpperTail(Math.abs(slope) / slopeError, freedom) < SIGNIFICANCE / 2
  }
}

/**
 * The state of a recorded window: what a `ChannelWatch` says after its last sample.
 *
 * @param samples in order of time; null is a missing value. Typed arrays may be given instead, NaN being
 *   the missing value there.
 * @param nowSeconds the moment of judgement, by default the time of the last entry
 * @throws RangeError naming the argument, also for arrays of different lengths or with nothing in them
 */
export function classifyWindow(
  samples:
    | readonly { timeSeconds: number; value: number | null }[]
    | { timesSeconds: ArrayLike<number>; values: ArrayLike<number> },
  tolerance: ChannelTolerance,
  nowSeconds?: number,
): ChannelStatus {
  const watch = new ChannelWatch(tolerance)
  let last: number | undefined
  if ('values' in samples && 'timesSeconds' in samples) {
    const { timesSeconds, values } = samples
    if (timesSeconds.length !== values.length) {
      throw new RangeError(
        `values must be as many as timesSeconds (${timesSeconds.length}), got ${values.length}`,
      )
    }
    for (let i = 0; i < values.length; i++) {
      const value = values[i] as number
      last = timesSeconds[i] as number
      watch.add(last, Number.isNaN(value) ? null : value)
    }
  } else {
    for (const { timeSeconds, value } of samples) {
      last = timeSeconds
      watch.add(timeSeconds, value)
    }
  }
  const now = nowSeconds ?? last
  if (now === undefined) throw new RangeError('samples must not be empty')
  return watch.status(now)
}

function short(value: number): string {
  return String(Number(value.toPrecision(2)))
}
