import { describe, expect, it } from 'vitest'
import { shortestInterval, sortTails, symmetricInterval } from '#app/metrology/coverage-interval.ts'
import { chiSquaredQuantile, normalQuantile } from '#app/statistics/distributions.ts'
import { RandomNumbers } from '#app/statistics/random.ts'
import { expectNear } from '#tests/support/near.ts'

/** The values that a distribution has at evenly spaced probabilities: a sample without chance. */
function ideal(count: number, quantile: (p: number) => number): Float64Array {
  return Float64Array.from({ length: count }, (_, i) => quantile((i + 0.5) / count))
}

describe('coverage intervals', () => {
  it('hold the stated part of the values, the same number outside on both sides (JCGM 101:2008, 7.7)', () => {
    const values = Float64Array.from({ length: 10_000 }, (_, i) => i + 1)
    // q = 9500, r = 250: from the 250th to the 9750th value.
    expect(symmetricInterval(values, 0.95)).toEqual([250, 9750])
    // pM is no whole number: q = 9, r = 1.
    expect(symmetricInterval(values.subarray(0, 10), 0.85)).toEqual([1, 10])
  })

  it('are the shortest where the distribution is skewed', () => {
    // f(a) = f(b) and P(a < χ² < b) = 0.95 for 4 degrees of freedom, by bisection on a.
    const quantile = (p: number) => chiSquaredQuantile(p, 4)
    const density = (x: number) => x * Math.exp(-x / 2)
    let [low, high] = [1e-6, 0.05 - 1e-6]
    for (let i = 0; i < 60; i++) {
      const below = (low + high) / 2
      if (density(quantile(below)) < density(quantile(below + 0.95))) low = below
      else high = below
    }
    const [a, b] = [quantile(low), quantile(low + 0.95)]
    const [from, to] = shortestInterval(ideal(20_000, quantile), 0.95)
    expectNear(from, a, { abs: 0.02 })
    expectNear(to, b, { abs: 0.02 })
    expectNear(to - from, b - a, { rel: 2e-4 })
  })

  it('reach to the end of a distribution whose density is highest there', () => {
    const [from, to] = shortestInterval(
      ideal(20_000, (p) => -Math.log(1 - p)),
      0.95,
    )
    expectNear(from, 0, { abs: 1e-4 })
    expectNear(to, -Math.log(0.05), { abs: 1e-3 })
    const [left, right] = shortestInterval(
      ideal(20_000, (p) => Math.log(p)),
      0.95,
    )
    expectNear(left, Math.log(0.05), { abs: 1e-3 })
    expectNear(right, 0, { abs: 1e-4 })
  })

  it('are nearly as steady for a normal distribution as the symmetric ones, and never longer', () => {
    let squares = 0
    for (let seed = 1; seed <= 20; seed++) {
      const random = new RandomNumbers(seed)
      const values = Float64Array.from({ length: 100_000 }, () => random.normal()).sort()
      const [low, high] = shortestInterval(values, 0.95)
      const [left, right] = symmetricInterval(values, 0.95)
      expect(high - low).toBeLessThanOrEqual(right - left)
      squares += (low - normalQuantile(0.025)) ** 2 + (high - normalQuantile(0.975)) ** 2
    }
    // 0.0085 from the symmetric ones, by the spread of a quantile; 0.02 from the very shortest.
    expect(Math.sqrt(squares / 40)).toBeLessThan(0.014)
  })

  it('follow a dip in the lengths that a cubic would pass over', () => {
    // 95.2 % in a narrow peak, with a few values far below it and many close above.
    const values = Float64Array.from({ length: 10_000 }, (_, i) => {
      if (i < 40) return i
      return i < 9560 ? 100 + (i - 40) * 1e-4 : 101 + (i - 9560) * 0.01
    })
    const [low, high] = shortestInterval(values, 0.95)
    expectNear(high - low, 0.95, { abs: 1e-9 })
  })

  it('of equal values are these', () => {
    const values = new Float64Array(5000).fill(3)
    expect(shortestInterval(values, 0.95)).toEqual([3, 3])
    expect(symmetricInterval(values, 0.95)).toEqual([3, 3])
  })

  it.each([20, 101, 2000, 9999])('need of %d values no more than the tails sorted', (count) => {
    for (const probability of [0.95, 0.6827, 0.99]) {
      const random = new RandomNumbers(count)
      const values = Float64Array.from({ length: count }, () => Math.round(20 * random.normal()) / 10)
      const sorted = Float64Array.from(values).sort()
      sortTails(values, probability)
      expect(symmetricInterval(values, probability)).toEqual(symmetricInterval(sorted, probability))
      expect(shortestInterval(values, probability)).toEqual(shortestInterval(sorted, probability))
    }
  })
})
