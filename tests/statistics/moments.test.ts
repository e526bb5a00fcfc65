import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { Moments } from '#app/statistics/moments.ts'
import { moments, RunningMoments } from '#app/statistics/moments.ts'
import { expectNear } from '#tests/support/near.ts'
import univariate from './data/univariate.json'

type Certified = {
  values: number[]
  mean: number
  standardDeviation: number
  lag1: number
  tolerance: { mean_rel: number; sd_rel: number; r1_abs: number }
}

function fromFile(entry: (typeof univariate)['Lottery']): Certified {
  const { mean, sd_n_minus_1: standardDeviation, lag1_autocorrelation: lag1 } = entry.expected
  return { values: entry.data.values, mean, standardDeviation, lag1, tolerance: entry.tolerance }
}

/** The rule by which the NumAcc sets are made: base + 0.2, then 500 times base + 0.1, base + 0.3. */
function alternating(base: string, sd_rel: number, r1_abs: number): Certified {
  const value = (tenths: number) => Number(`${base}.${tenths}`)
  const values = [value(2)]
  for (let i = 0; i < 500; i++) values.push(value(1), value(3))
  return {
    values,
    mean: value(2),
    standardDeviation: 0.1,
    lag1: -0.999,
    tolerance: { mean_rel: 1e-14, sd_rel, r1_abs },
  }
}

// NIST Statistical Reference Datasets, univariate summary statistics, certified values. Values like
// 10000000.2 are not exact in binary, which sets the tolerances of NumAcc3 and NumAcc4.
const certified: [string, Certified][] = [
  ['Lottery', fromFile(univariate.Lottery)],
  ['Lew', fromFile(univariate.Lew)],
  ['Mavro', fromFile(univariate.Mavro)],
  ['Michelso', fromFile(univariate.Michelso)],
  ['NumAcc1', fromFile(univariate.NumAcc1)],
  ['NumAcc2', alternating('1', 1e-12, 1e-12)],
  ['NumAcc3', alternating('1000000', 1e-9, 1e-8)],
  ['NumAcc4', alternating('10000000', 1e-8, 1e-7)],
]

function expectCertified(actual: Moments, { values, tolerance, ...expected }: Certified): void {
  expect(actual.count).toBe(values.length)
  expectNear(actual.mean, expected.mean, { rel: tolerance.mean_rel })
  expectNear(actual.standardDeviation, expected.standardDeviation, { rel: tolerance.sd_rel })
  expectNear(actual.lag1, expected.lag1, { abs: tolerance.r1_abs })
}

describe('moments of the NIST reference data sets', () => {
  it.each(certified)('%s, all values at once', (_name, set) => {
    expectCertified(moments(set.values), set)
  })

  it.each(certified)('%s, one value after the other', (_name, set) => {
    const running = new RunningMoments()
    for (const value of set.values) running.add(value)
    expectCertified(running.moments, set)
  })
})

describe('moments', () => {
  it('are the same at once and one by one, and shift and scale with the values', () => {
    const values = fc.array(fc.double({ min: -1e3, max: 1e3, noNaN: true }), { minLength: 2, maxLength: 60 })
    fc.assert(
      fc.property(values, fc.double({ min: 0.1, max: 10, noNaN: true }), (list, factor) => {
        const all = moments(list)
        const running = new RunningMoments()
        for (const value of list) running.add(value * factor - 7)
        const scale = Math.max(...list.map(Math.abs), 1)
        expectNear(running.mean, all.mean * factor - 7, { abs: 1e-12 * scale * factor + 1e-14 })
        expectNear(running.standardDeviation, all.standardDeviation * factor, {
          rel: 1e-10,
          abs: 1e-12 * scale * factor,
        })
        if (all.standardDeviation > 1e-3 * scale) expectNear(running.lag1, all.lag1, { abs: 1e-8 })
      }),
    )
  })

  it('of equal values have no spread and a lag-1 autocorrelation of 0', () => {
    const equal = { count: 3, mean: 0.1, standardDeviation: 0, lag1: 0 }
    expect(moments([0.1, 0.1, 0.1])).toEqual(equal)
    const running = new RunningMoments()
    for (let i = 0; i < 3; i++) running.add(0.1)
    expect(running.moments).toEqual(equal)
  })

  it('of a typed array are taken too', () => {
    expect(moments(Float64Array.of(1, 2, 3, 4)).mean).toBe(2.5)
  })

  it('start anew after a reset', () => {
    const running = new RunningMoments()
    for (const value of [5, 9, 100]) running.add(value)
    running.reset()
    expect(running.count).toBe(0)
    for (const value of [1, 2, 6]) running.add(value)
    expect(running.moments).toEqual({ count: 3, mean: 3, standardDeviation: Math.sqrt(7), lag1: -1 / 14 })
  })

  it('refuse too few values and values that are not finite, by name', () => {
    for (const bad of [[], [1]]) {
      expect(() => moments(bad)).toThrow(RangeError)
      expect(() => moments(bad)).toThrow('values')
    }
    expect(() => moments([1, Number.NaN, 2])).toThrow('values[1]')
    const running = new RunningMoments()
    expect(() => running.mean).toThrow('count')
    running.add(1)
    expect(running.mean).toBe(1)
    expect(() => running.standardDeviation).toThrow(RangeError)
    expect(() => running.lag1).toThrow('count')
    expect(() => running.add(Number.POSITIVE_INFINITY)).toThrow('value')
    expect(running.count).toBe(1)
  })
})
