/** A smooth function on an interval as a Chebyshev series, with its derivative. */
export class ChebyshevSeries {
  readonly low: number
  readonly high: number
  readonly #coefficients: Float64Array
  readonly #slopes: Float64Array

  private constructor(low: number, high: number, coefficients: Float64Array) {
    this.low = low
    this.high = high
    this.#coefficients = coefficients
    this.#slopes = differentiate(coefficients, 2 / (high - low))
  }

  /** The arguments at which a series of so many terms needs the values of its function. */
  static nodes(low: number, high: number, terms: number): number[] {
    return Array.from({ length: terms }, (_, i) => {
      const x = Math.cos((Math.PI * (i + 0.5)) / terms)
      return (low + high) / 2 + ((high - low) / 2) * x
    })
  }

  /** The series that takes the given values at `nodes(low, high, values.length)`. */
  static through(low: number, high: number, values: readonly number[]): ChebyshevSeries {
    const terms = values.length
    const coefficients = Float64Array.from({ length: terms }, (_, order) => {
      const sum = values.reduce(
        (total, value, i) => total + value * Math.cos((Math.PI * order * (i + 0.5)) / terms),
        0,
      )
      return ((order === 0 ? 1 : 2) * sum) / terms
    })
    return new ChebyshevSeries(low, high, coefficients)
  }

  value(at: number): number {
    return clenshaw(this.#coefficients, this.#unit(at))
  }

  slope(at: number): number {
    return clenshaw(this.#slopes, this.#unit(at))
  }

  #unit(at: number): number {
    return (2 * at - this.low - this.high) / (this.high - this.low)
  }
}

function clenshaw(coefficients: Float64Array, x: number): number {
  let next = 0
  let afterNext = 0
  for (let i = coefficients.length - 1; i > 0; i--) {
    const current = (coefficients[i] as number) + 2 * x * next - afterNext
    afterNext = next
    next = current
  }
  return (coefficients[0] ?? 0) + x * next - afterNext
}

function differentiate(coefficients: Float64Array, scale: number): Float64Array {
  const terms = coefficients.length
  const slopes = new Float64Array(terms)
  for (let i = terms - 1; i > 0; i--) {
    const above = i + 1 < terms ? (slopes[i + 1] as number) : 0
    slopes[i - 1] = above + 2 * i * (coefficients[i] as number) * scale
  }
  slopes[0] = (slopes[0] as number) / 2
  return slopes
}
