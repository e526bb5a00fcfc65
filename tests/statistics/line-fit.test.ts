import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { fitLine } from '#app/statistics/line-fit.ts'
import { fitYork } from '#app/statistics/york-fit.ts'
import { expectNear } from '#tests/support/near.ts'
import lines from './data/lines.json'
import york from './data/york.json'

const certified = ['Norris', 'NoInt1', 'NoInt2'] as const

describe('A straight line', () => {
  it.each(certified)('has the certified values of NIST StRD %s', (name) => {
    const { data, expected } = lines[name]
    const throughOrigin = name !== 'Norris'
    const fit = fitLine({
      x: data.rows.map((row) => row[1] as number),
      y: data.rows.map((row) => row[0] as number),
      throughOrigin,
    })
    const [slope, intercept = 0] = [...expected.coefficients].reverse()
    const [slopeError, interceptError = 0] = [...expected.sd_of_coefficients].reverse()
    expectNear(fit.slope, slope as number, { rel: 1e-12 })
    expectNear(fit.intercept, intercept, { rel: 1e-10 })
    expectNear(fit.slopeError, slopeError as number, { rel: 1e-12 })
    expectNear(fit.interceptError, interceptError, { rel: 1e-12 })
    expectNear(fit.residualDeviation, expected.residual_sd, { rel: 1e-11 })
    expectNear(fit.rSquared, expected.r_squared, { rel: 1e-13 })
    expectNear(fit.chiSquared, expected.residual_ss, { rel: 1e-11 })
    expect(fit.degreesOfFreedom).toBe(expected.dof)
    expect(fit.pValue).toBeNull()
  })

  it('has the values of the thermometer calibration of JCGM 100:2008, H.3, and its prediction', () => {
    const { data, expected } = lines.GUM_H3_thermometer
    const fit = fitLine(data)
    const { full } = expected
    expectNear(fit.slope, full.slope, { rel: 1e-10 })
    expectNear(fit.intercept, full.intercept, { rel: 1e-10 })
    expectNear(fit.covariance, full.cov_intercept_slope, { rel: 1e-10 })
    expectNear(fit.lineError(10), full.u_b30, { rel: 1e-10 })
    expect(fit.intercept.toFixed(4)).toBe(expected.printed.y1.toFixed(4))
    expect(fit.lineError(10).toFixed(4)).toBe(expected.printed.u_b30.toFixed(4))
  })

  it('has the values of the cadmium calibration of the EURACHEM/CITAC guide, A5', () => {
    const { data, expected } = lines.Eurachem_A5_calibration
    const fit = fitLine(data)
    expectNear(fit.slope, expected.full.slope, { rel: 1e-10 })
    expectNear(fit.interceptError, expected.full.s_intercept, { rel: 1e-10 })
    expectNear(fit.residualDeviation, expected.full.residual_sd, { rel: 1e-10 })
  })

  it('weighted has the internal errors of R, lm with weights', () => {
    const swapped = lines.weighted_pearson_swapped
    const fit = fitLine({ ...swapped.data, weights: swapped.data.weights_of_y })
    expectNear(fit.slopeError, swapped.expected.full.u_slope_internal, { rel: 1e-10 })
    expectNear(fit.covariance, swapped.expected.full.cov_internal, { rel: 1e-10 })
    const { data, expected } = lines.weighted_small
    const weights = data.u.map((u) => 1 / u ** 2)
    const free = fitLine({ ...data, weights })
    expectNear(free.slope, expected.weighted.slope, { rel: 1e-10 })
    expectNear(free.chiSquared, expected.weighted.chi2, { rel: 1e-10 })
    const origin = fitLine({ ...data, weights, throughOrigin: true })
    expectNear(origin.slope, expected.origin_weighted.slope, { rel: 1e-10 })
    expectNear(origin.slopeError, expected.origin_weighted.u_slope_internal, { rel: 1e-10 })
  })

  const points = fc.array(
    fc.record({
      x: fc.double({ min: -50, max: 50, noNaN: true }),
      y: fc.double({ min: -50, max: 50, noNaN: true }),
    }),
    { minLength: 4, maxLength: 20 },
  )
  const isSpread = (them: { x: number }[]) => {
    const x = them.map((it) => it.x)
    return Math.max(...x) - Math.min(...x) > 1
  }

  it('follows a change of units and a shift of both axes', () => {
    fc.assert(
      fc.property(points.filter(isSpread), fc.double({ min: 0.1, max: 10, noNaN: true }), (them, unit) => {
        const x = them.map((it) => it.x)
        const y = them.map((it) => it.y)
        const fit = fitLine({ x, y })
        const moved = fitLine({ x: x.map((value) => unit * value + 3), y: y.map((value) => 2 * value - 5) })
        expectNear(moved.slope, (2 * fit.slope) / unit, { rel: 1e-7, abs: 1e-8 })
        expectNear(moved.slopeError, (2 * fit.slopeError) / unit, { rel: 1e-6, abs: 1e-8 })
        expectNear(
          fit.leverages.reduce((total, h) => total + h, 0),
          2,
          { rel: 1e-9 },
        )
      }),
    )
  })

  it('is refused for points that give none, naming the argument', () => {
    expect(() => fitLine({ x: [1, 1, 1], y: [1, 2, 3] })).toThrow(/^x must not be all equal/)
    expect(() => fitLine({ x: [0, 0], y: [1, 2], throughOrigin: true })).toThrow(/^x must not be all zero/)
    expect(() => fitLine({ x: [1], y: [1] })).toThrow(/^x must have at least 2/)
    expect(() => fitLine({ x: [1, 2], y: [1] })).toThrow(/^y must be as many/)
    expect(() => fitLine({ x: [1, Number.NaN], y: [1, 2] })).toThrow(/^x\[1\]/)
    expect(() => fitLine({ x: [1, 2], y: [1, 2], weights: [1, 0] })).toThrow(/^weights\[1\]/)
  })
})

describe('A line through points uncertain in both coordinates', () => {
  const { x, y, weight_x, weight_y } = york.pearson_york.data
  const pearson = {
    x,
    y,
    xError: weight_x.map((w) => 1 / Math.sqrt(w)),
    yError: weight_y.map((w) => 1 / Math.sqrt(w)),
  }

  it("has the published values of Pearson's data with York's weights", () => {
    const { expected } = york.pearson_york
    const fit = fitYork(pearson)
    expectNear(fit.slope, expected.slope, { abs: 2e-10 })
    expectNear(fit.intercept, expected.intercept, { abs: 2e-10 })
    expectNear(fit.slopeError, expected.u_slope, { rel: 1e-8 })
    expectNear(fit.interceptError, expected.u_intercept, { rel: 1e-8 })
    expectNear(fit.reducedChiSquared, expected.reduced_chi2, { rel: 1e-9 })
    expectNear(fit.covariance, expected.cov_intercept_slope, { rel: 1e-8 })
  })

  it('takes a correlation between the two errors of a point', () => {
    const { expected, data } = york.pearson_york_r05
    const fit = fitYork({ ...pearson, correlation: x.map(() => data.error_correlation) })
    expectNear(fit.slope, expected.slope, { rel: 1e-9 })
    expectNear(fit.interceptError, expected.u_intercept, { rel: 1e-8 })
    expectNear(fit.chiSquared, expected.S, { rel: 1e-9 })
  })

  it('is the weighted line without errors in x, and the closed form of Deming with constant ones', () => {
    for (const { data, expected } of [york.limit_sx_to_zero, york.deming_constant_ratio]) {
      const each = (value: number) => data.x.map(() => value)
      const fit = fitYork({ ...data, xError: each(data.u_x), yError: each(data.u_y) })
      expectNear(fit.slope, expected.slope, { rel: 1e-9 })
      expectNear(fit.intercept, expected.intercept, { rel: 1e-9 })
      expectNear(fit.slopeError, expected.u_slope, { rel: 1e-9 })
    }
  })

  it('is refused for all x equal, a point without any uncertainty, and lengths that differ', () => {
    const [one, two] = [
      [1, 1],
      [1, 2],
    ]
    expect(() =>
      fitYork({ x: one as number[], y: two as number[], xError: one as number[], yError: one as number[] }),
    ).toThrow(/^x must not be all equal/)
    expect(() => fitYork({ x: [1, 2], y: [1, 2], xError: [0, 1], yError: [0, 1] })).toThrow(/^yError\[0\]/)
    expect(() => fitYork({ x: [1, 2], y: [1, 2], xError: [1], yError: [1, 1] })).toThrow(
      /^xError must be as many/,
    )
  })
})
