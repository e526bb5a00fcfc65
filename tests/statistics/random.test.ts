import { describe, expect, it } from 'vitest'
import { chiSquaredCdf, normalQuantile } from '#app/statistics/distributions.ts'
import { moments } from '#app/statistics/moments.ts'
import { RandomNumbers } from '#app/statistics/random.ts'
import { expectNear } from '#tests/support/near.ts'

const COUNT = 200_000

function draw(seed: number, next: (random: RandomNumbers) => number): Float64Array {
  const random = new RandomNumbers(seed)
  return Float64Array.from({ length: COUNT }, () => next(random))
}

/** The part of the values below the p quantile, for several p, within five standard deviations of it. */
function expectQuantiles(values: Float64Array, quantile: (p: number) => number): void {
  for (const p of [0.001, 0.01, 0.1, 0.25, 0.5, 0.75, 0.9, 0.99, 0.999]) {
    const limit = quantile(p)
    const part = values.reduce((count, value) => (value < limit ? count + 1 : count), 0) / COUNT
    expectNear(part, p, { abs: 5 * Math.sqrt((p * (1 - p)) / COUNT) })
  }
}

describe('random numbers', () => {
  it('are those of the reference implementation of xoshiro128** (Blackman and Vigna, version 1.1)', () => {
    // From the state 1, 2, 3, 4, as the tests of several published ports have them.
    const random = new RandomNumbers([1, 2, 3, 4])
    expect(Array.from({ length: 10 }, () => random.word())).toEqual([
      11520, 0, 5927040, 70819200, 2031721883, 1637235492, 1287239034, 3734860849, 3729100597, 4258142804,
    ])
  })

  it('are the same for the same seed and others for another', () => {
    const words = (seed: number) => Array.from(draw(seed, (random) => random.word()).subarray(0, 50))
    expect(words(7)).toEqual(words(7))
    expect(words(7)).not.toEqual(words(8))
    expect(words(2 ** 32 + 7)).not.toEqual(words(7))
  })

  it('are uniform between 0 and 1', () => {
    const values = draw(1, (random) => random.uniform())
    expectQuantiles(values, (p) => p)
    const { mean, standardDeviation, lag1 } = moments(values)
    expectNear(mean, 0.5, { abs: 5 / Math.sqrt(12 * COUNT) })
    expectNear(standardDeviation, 1 / Math.sqrt(12), { rel: 0.005 })
    expectNear(lag1, 0, { abs: 5 / Math.sqrt(COUNT) })
    expect(Math.min(...values.subarray(0, 50_000))).toBeGreaterThan(0)
    expect(Math.max(...values.subarray(0, 50_000))).toBeLessThan(1)
  })

  it('are normal', () => {
    const values = draw(2, (random) => random.normal())
    expectQuantiles(values, normalQuantile)
    const { mean, standardDeviation, lag1 } = moments(values)
    expectNear(mean, 0, { abs: 5 / Math.sqrt(COUNT) })
    expectNear(standardDeviation, 1, { abs: 5 / Math.sqrt(2 * COUNT) })
    expectNear(lag1, 0, { abs: 5 / Math.sqrt(COUNT) })
  })

  it.each([2.5, 5, 30.7])('have the χ² distribution with %s degrees of freedom', (nu) => {
    const values = draw(3, (random) => chiSquaredCdf(nu * random.chiSquaredRatio(nu), nu))
    expectQuantiles(values, (p) => p)
    expectNear(moments(draw(4, (random) => random.chiSquaredRatio(nu))).mean, 1, {
      abs: 5 * Math.sqrt(2 / nu / COUNT),
    })
  })

  it.each([-1, 0.5, Number.NaN, Number.POSITIVE_INFINITY, 2 ** 53])('refuse the seed %s by name', (seed) => {
    expect(() => new RandomNumbers(seed)).toThrow(RangeError)
    expect(() => new RandomNumbers(seed)).toThrow('seed')
  })

  it('refuse a state of zeros, which never leaves itself', () => {
    expect(() => new RandomNumbers([0, 0, 0, 0])).toThrow('seed')
  })
})
