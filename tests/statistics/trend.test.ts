import { describe, expect, it } from 'vitest'
import { mannKendall, theilSen } from '#app/statistics/trend.ts'
import { expectNear } from '#tests/support/near.ts'
import drift from './data/drift.json'
import univariate from './data/univariate.json'

const series: [string, number[], (typeof drift)['up12']['expected']][] = [
  ['up12', drift.up12.data.values, drift.up12.expected],
  ['ties10', drift.ties10.data.values, drift.ties10.expected],
  ['flat_alternating', drift.flat_alternating.data.values, drift.flat_alternating.expected],
  ['Mavro', drift.Mavro.data.values, drift.Mavro.expected],
  ['Michelso', univariate.Michelso.data.values, drift.Michelso.expected],
  ['Lew', univariate.Lew.data.values, drift.Lew.expected],
]

describe('A trend', () => {
  // NIST StRD series and own ones; S, z and p by the formulas with the correction for ties, slopes by scipy.
  it.each(series)(
    'of %s has the statistic of Mann and Kendall and the slope of Theil and Sen',
    (_, values, expected) => {
      const { s, z, p } = mannKendall(values)
      expect(s).toBe(expected.mann_kendall.S)
      expectNear(z, expected.mann_kendall.z, { rel: 1e-9 })
      expectNear(p, expected.mann_kendall.p_two_sided, { rel: 1e-8 })
      expectNear(theilSen(values), expected.theil_sen_slope, { rel: 1e-9, abs: 1e-15 })
    },
  )

  it('is none in equal values, turns with their order, and hardly heeds one value far off', () => {
    expect(mannKendall([2, 2, 2, 2])).toEqual({ s: 0, z: 0, p: 1 })
    const rising = [1, 2, 3, 4, 5, 6]
    expect(mannKendall([...rising].reverse()).s).toBe(-mannKendall(rising).s)
    expectNear(theilSen([1, 2, 3, 400, 5, 6, 7]), 1, { rel: 1e-12 })
  })

  it('is refused for too few values', () => {
    expect(() => mannKendall([1, 2])).toThrow(/^values must be at least 3/)
    expect(() => theilSen([1])).toThrow(/^values must be at least 2/)
    expect(() => theilSen([1, Number.POSITIVE_INFINITY])).toThrow(/^values\[1\]/)
  })
})
