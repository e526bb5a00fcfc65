import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import {
  chiSquaredCdf,
  chiSquaredQuantile,
  chiSquaredUpperTail,
  fCdf,
  fQuantile,
  fUpperTail,
  normalCdf,
  normalQuantile,
  normalUpperTail,
  studentCdf,
  studentQuantile,
  studentUpperTail,
} from '#app/statistics/distributions.ts'
import { logBeta, logGamma } from '#app/statistics/special-functions.ts'
import { expectNear } from '#tests/support/near.ts'
import tables from './data/quantiles.json'

const degrees = (nu: number | string): number => (nu === 'inf' ? Number.POSITIVE_INFINITY : Number(nu))
const twoSided = (p: number): number => (1 + p) / 2

describe("quantiles of Student's t", () => {
  const { data, expected, tolerance, data_exact_sigma } = tables.table_G2
  it.each(expected)('match JCGM 100:2008, Table G.2, for ν = %s', (nu, ...factors) => {
    const probabilities = data.columns.slice(1).map(Number)
    expect(factors).toHaveLength(probabilities.length)
    probabilities.forEach((p, i) => {
      expectNear(studentQuantile(twoSided(p), degrees(nu)), Number(factors[i]), tolerance)
    })
  })

  it.each(data_exact_sigma)(
    'match it at exactly 1, 2 and 3 normal standard deviations for ν = %s',
    (nu, ...factors) => {
      factors.forEach((factor, i) => {
        expectNear(studentQuantile(normalCdf(i + 1), nu), factor, { rel: 5e-9 })
      })
    },
  )

  it.each(tables.t_fractional_dof.expected)(
    'take ν = $nu without rounding it (scipy, mpmath)',
    ({ nu, p, t }) => {
      expectNear(studentQuantile(twoSided(p), nu), t, tables.t_fractional_dof.tolerance)
    },
  )

  it('agree to 13 digits with values computed at 30 digits (mpmath, incomplete beta function)', () => {
    for (const [p, nu, t] of [
      [0.975, 4.5, 2.658912347204404],
      [0.975, 2.3, 3.8071632082321307],
      [0.975, 11.34, 2.192960597023386],
      [0.995, 16.7, 2.9046809384293586],
      [normalCdf(2), 50, 2.051248172881657],
      [normalCdf(3), 4, 6.620205966815866],
    ] as const) {
      expectNear(studentQuantile(p, nu), t, { rel: 1e-13 + 3e-16 / (1 - p) })
    }
  })

  it('have the closed forms for one and two degrees of freedom', () => {
    for (const p of [0.501, 0.55, 0.6, 0.75, 0.9, 0.975, 0.999, 1 - 1e-9]) {
      expectNear(studentQuantile(p, 1), 1 / Math.tan(Math.PI * (1 - p)), { rel: 1e-13 })
      expectNear(studentQuantile(p, 2), (2 * p - 1) / Math.sqrt(2 * p * (1 - p)), { rel: 1e-13 })
    }
    expect(studentQuantile(0.5, 3)).toBe(0)
  })

  it('are inverse to the distribution, odd about a half, and fall with ν', () => {
    const nus = fc.double({ min: Math.log(0.3), max: Math.log(1e7), noNaN: true }).map(Math.exp)
    fc.assert(
      fc.property(nus, fc.double({ min: 0.5001, max: 0.9999, noNaN: true }), (nu, p) => {
        const t = studentQuantile(p, nu)
        expectNear(studentUpperTail(t, nu), 1 - p, { rel: 1e-11 })
        expectNear(studentCdf(t, nu), p, { rel: 1e-12 })
        expectNear(studentQuantile(1 - p, nu), -t, { rel: 1e-10 })
        expect(studentQuantile(p, nu * 1.01)).toBeLessThan(t)
      }),
    )
  })

  it('do not jump where the expansion for many degrees of freedom takes over', () => {
    // ν crosses 10⁵ at fixed t: both ways must lie on one smooth curve.
    for (const t of [0.5, 2, 4, 5.6]) {
      const tails = [99_998, 99_999, 100_001, 100_002].map((nu) => Math.log(studentUpperTail(t, nu)))
      const [a, b, c, d] = tails as [number, number, number, number]
      expectNear((d - c) / (b - a), 1, { abs: 0.05 })
      expectNear((c - b) / (b - a), 2, { abs: 0.05 })
    }
  })

  it('go over into those of the normal distribution', () => {
    expectNear(studentQuantile(0.975, 1e12), normalQuantile(0.975), { rel: 1e-11 })
    expect(studentQuantile(0.975, Number.POSITIVE_INFINITY)).toBe(normalQuantile(0.975))
  })
})

describe('the other distributions (scipy)', () => {
  const { norm, chi2, chi2_sf, F } = tables.quantiles.expected
  it('normal', () => {
    for (const { p, z } of norm) {
      expectNear(normalQuantile(p), z, { rel: 1e-13 })
      expectNear(normalCdf(z), p, { rel: 1e-14 })
    }
    // Closed form: far tail φ(z)/z (1 − 1/z² + 3/z⁴ − 15/z⁶ …).
    const z = 30
    const series = [1, -1, 3, -15, 105, -945].reduce((sum, c, i) => sum + c / z ** (2 * i), 0)
    expectNear(normalUpperTail(z), (Math.exp((-z * z) / 2) / Math.sqrt(2 * Math.PI) / z) * series, {
      rel: 1e-12,
    })
    for (const p of [1e-300, 1e-20, 0.01, 0.3, 0.499999]) {
      expectNear(normalUpperTail(-normalQuantile(p)), p, { rel: 1e-12 })
    }
  })

  it('χ²', () => {
    for (const { p, nu, x } of chi2) {
      expectNear(chiSquaredQuantile(p, nu), x, { rel: 1e-11 })
      expectNear(chiSquaredCdf(x, nu), p, { rel: 1e-11 })
    }
    for (const { x, nu, q } of chi2_sf) expectNear(chiSquaredUpperTail(x, nu), q, tables.quantiles.tolerance)
    // Closed form for two degrees of freedom.
    for (const x of [0.01, 1, 7, 90]) expectNear(chiSquaredUpperTail(x, 2), Math.exp(-x / 2), { rel: 1e-13 })
    expect(chiSquaredUpperTail(0, 4)).toBe(1)
  })

  it('F', () => {
    for (const { p, n1, n2, x } of F) {
      expectNear(fQuantile(p, n1, n2), x, { rel: 1e-11 })
      expectNear(fCdf(x, n1, n2), p, { rel: 1e-12 })
    }
    fc.assert(
      fc.property(
        fc.double({ min: 0.3, max: 300, noNaN: true }),
        fc.double({ min: 0.3, max: 300, noNaN: true }),
        fc.double({ min: 0.001, max: 0.999, noNaN: true }),
        (n1, n2, p) => {
          const x = fQuantile(p, n1, n2)
          expectNear(fCdf(x, n1, n2), p, { rel: 1e-9 })
          expectNear(fUpperTail(1 / x, n2, n1), p, { rel: 1e-9 })
        },
      ),
    )
    // A squared t variable is an F variable with one degree of freedom in the numerator.
    expectNear(fQuantile(0.95, 1, 7.5), studentQuantile(0.975, 7.5) ** 2, { rel: 1e-12 })
  })

  it('rest on gamma and beta functions with their known values', () => {
    expectNear(logGamma(0.5), Math.log(Math.PI) / 2, { rel: 1e-14 })
    expectNear(logGamma(5), Math.log(24), { rel: 1e-14 })
    expectNear(logGamma(1), 0, { abs: 4e-15 })
    // 170! as a product of logarithms.
    const factorial = Array.from({ length: 170 }, (_, i) => Math.log(i + 1)).reduce((a, b) => a + b)
    expectNear(logGamma(171), factorial, { rel: 1e-14 })
    expectNear(logBeta(2, 3), Math.log(1 / 12), { rel: 1e-14 })
    for (const [a, b] of [
      [0.5, 9.9],
      [0.5, 12],
      [9.9, 9.9],
      [11, 30],
    ] as const) {
      // B(a, b + 1) = B(a, b) b/(a + b)
      expectNear(logBeta(a, b + 1) - logBeta(a, b), Math.log(b / (a + b)), { abs: 1e-13 })
    }
  })
})

describe('distributions refuse by name', () => {
  it.each<[string, () => unknown]>([
    ['p', () => normalQuantile(0)],
    ['p', () => normalQuantile(1)],
    ['p', () => studentQuantile(1.2, 3)],
    ['p', () => studentQuantile(Number.NaN, 3)],
    ['degreesOfFreedom', () => studentQuantile(0.9, 0)],
    ['degreesOfFreedom', () => studentQuantile(0.9, -2)],
    ['degreesOfFreedom', () => studentQuantile(0.9, Number.NaN)],
    ['t', () => studentCdf(Number.NaN, 3)],
    ['z', () => normalCdf(Number.POSITIVE_INFINITY)],
    ['x', () => chiSquaredCdf(-1, 3)],
    ['degreesOfFreedom', () => chiSquaredQuantile(0.5, Number.POSITIVE_INFINITY)],
    ['p', () => fQuantile(0, 1, 2)],
    ['numerator', () => fQuantile(0.5, 0, 2)],
    ['denominator', () => fCdf(1, 1, Number.NaN)],
    ['x', () => fUpperTail(Number.NaN, 1, 1)],
    ['x', () => logGamma(0)],
  ])('%s', (name, call) => {
    expect(call).toThrow(RangeError)
    expect(call).toThrow(new RegExp(`^-?${name} must`))
  })
})
