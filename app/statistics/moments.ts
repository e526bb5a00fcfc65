import { requireFinite } from './domain.ts'

/**
 * `standardDeviation` divides by n − 1. `lag1` is Σ(xᵢ−x̄)(xᵢ₊₁−x̄)/Σ(xᵢ−x̄)², and 0 where all values are
 * equal, for which it has no value.
 */
export type Moments = { count: number; mean: number; standardDeviation: number; lag1: number }

/**
 * Mean, standard deviation and lag-1 autocorrelation in two passes.
 *
 * @param values at least two
 * @throws RangeError naming `values` for fewer than two or one that is not finite
 */
export function moments(values: ArrayLike<number>): Moments {
  const count = values.length
  if (count < 2) throw new RangeError(`values must hold at least two numbers, got ${count}`)
  // Differences from the first value are exact where the values agree in their leading digits.
  const origin = values[0] as number
  let sum = 0
  let lost = 0
  for (let i = 0; i < count; i++) {
    const value = values[i] as number
    if (!Number.isFinite(value)) throw new RangeError(`values[${i}] must be a finite number, got ${value}`)
    const term = value - origin - lost
    const next = sum + term
    lost = next - sum - term
    sum = next
  }
  const shift = sum / count
  let squares = 0
  let rest = 0
  let products = 0
  let before = 0
  for (let i = 0; i < count; i++) {
    const deviation = (values[i] as number) - origin - shift
    squares += deviation * deviation
    rest += deviation
    products += before * deviation
    before = deviation
  }
  // What rounding left in the mean is taken out again.
  const variation = squares - (rest * rest) / count
  return {
    count,
    mean: origin + (shift + rest / count),
    standardDeviation: Math.sqrt(variation / (count - 1)),
    lag1: variation > 0 ? products / variation : 0,
  }
}

/**
 * The same for values that arrive one by one, in constant time and memory each, by updates of the mean and
 * of the sums of products about it, which stay accurate where a sum of squares would cancel.
 */
export class RunningMoments {
  #count = 0
  #origin = 0
  #last = 0
  #shift = 0
  #squares = 0
  #products = 0

  /** @throws RangeError naming `value` unless it is finite */
  add(value: number): void {
    requireFinite('value', value)
    if (this.#count === 0) {
      this.#origin = value
      this.#count = 1
      return
    }
    const shifted = value - this.#origin
    const delta = shifted - this.#shift
    const move = delta / (this.#count + 1)
    // The pairs so far are referred to the new mean, then the new pair is added. The first value is 0.
    this.#products += move * (this.#last - 2 * this.#shift) + (this.#count - 1) * move * move
    this.#shift += move
    this.#products += (this.#last - this.#shift) * (shifted - this.#shift)
    this.#squares += delta * (shifted - this.#shift)
    this.#last = shifted
    this.#count += 1
  }

  reset(): void {
    this.#count = 0
    this.#last = 0
    this.#shift = 0
    this.#squares = 0
    this.#products = 0
  }

  get count(): number {
    return this.#count
  }

  /** @throws RangeError naming `count` before the first value */
  get mean(): number {
    this.#require(1)
    return this.#origin + this.#shift
  }

  /** @throws RangeError naming `count` before the second value */
  get standardDeviation(): number {
    this.#require(2)
    return Math.sqrt(Math.max(0, this.#squares) / (this.#count - 1))
  }

  /** @throws RangeError naming `count` before the second value */
  get lag1(): number {
    this.#require(2)
    return this.#squares > 0 ? this.#products / this.#squares : 0
  }

  /** @throws RangeError naming `count` before the second value */
  get moments(): Moments {
    const { count, mean, standardDeviation, lag1 } = this
    return { count, mean, standardDeviation, lag1 }
  }

  #require(least: number): void {
    if (this.#count < least) throw new RangeError(`count must be at least ${least}, is ${this.#count}`)
  }
}
