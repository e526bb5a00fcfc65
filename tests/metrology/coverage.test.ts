import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { coverageFactor, effectiveDegreesOfFreedom } from '#app/metrology/coverage.ts'
import { expectNear } from '#tests/support/near.ts'
import published from './data/uncertainty.json'

describe('effective degrees of freedom', () => {
  it('are those of the example in JCGM 100:2008, G.4.1, and are not rounded before k is looked up', () => {
    const { data, expected, tolerance } = published.G4_example
    const combined = Math.hypot(...data.rel_u_percent)
    expectNear(combined, expected.uc_percent, tolerance)
    const nu = effectiveDegreesOfFreedom(data.rel_u_percent, data.dof)
    expectNear(nu, expected.nu_eff, tolerance)
    expect(nu.toFixed(1)).toBe(expected.printed.nu.toFixed(1))
    expectNear(coverageFactor(19), expected.t95, tolerance)
    expectNear(coverageFactor(nu) * combined, expected.U95_percent, { rel: 1e-5 })
    expectNear(coverageFactor(nu), expected.printed.t, { abs: 0.005 })
  })

  it('take an infinite number for one input (course example, recomputed)', () => {
    const { data, expected, tolerance } = published.WS_one_infinite
    const freedom = data.dof.map((nu) => (nu === 'inf' ? Number.POSITIVE_INFINITY : Number(nu)))
    expectNear(effectiveDegreesOfFreedom(data.u, freedom), expected.nu_eff, tolerance)
    expectNear(Math.hypot(...data.u), expected.uc, tolerance)
  })

  it('lie between the least single number and the sum of all', () => {
    const input = fc.record({
      u: fc.double({ min: 1e-6, max: 1e6, noNaN: true }),
      nu: fc.double({ min: 0.5, max: 1e4, noNaN: true }),
    })
    fc.assert(
      fc.property(fc.array(input, { minLength: 1, maxLength: 8 }), (inputs) => {
        const freedom = inputs.map(({ nu }) => nu)
        const nu = effectiveDegreesOfFreedom(
          inputs.map(({ u }) => u),
          freedom,
        )
        expect(nu).toBeGreaterThanOrEqual(Math.min(...freedom) * (1 - 1e-12))
        expect(nu).toBeLessThanOrEqual(freedom.reduce((a, b) => a + b) * (1 + 1e-12))
      }),
    )
  })

  it('do not depend on the unit of the result, however small', () => {
    const nu = effectiveDegreesOfFreedom([3, 4], [5, 6])
    expectNear(effectiveDegreesOfFreedom([3e-120, 4e-120], [5, 6]), nu, { rel: 1e-14 })
    expectNear(effectiveDegreesOfFreedom([3e120, 4e120], [5, 6]), nu, { rel: 1e-14 })
  })

  it('are infinite where nothing finite contributes', () => {
    expect(effectiveDegreesOfFreedom([1, 0], [Number.POSITIVE_INFINITY, 3])).toBe(Number.POSITIVE_INFINITY)
    expect(effectiveDegreesOfFreedom([0], [3])).toBe(Number.POSITIVE_INFINITY)
    expectNear(coverageFactor(Number.POSITIVE_INFINITY), 1.959963984540054, { rel: 1e-14 })
  })

  it.each<[string, () => unknown]>([
    ['contributions', () => effectiveDegreesOfFreedom([], [])],
    ['degreesOfFreedom', () => effectiveDegreesOfFreedom([1, 2], [3])],
    ['contributions[1]', () => effectiveDegreesOfFreedom([1, -2], [3, 3])],
    ['contributions[0]', () => effectiveDegreesOfFreedom([Number.NaN], [3])],
    ['degreesOfFreedom[0]', () => effectiveDegreesOfFreedom([1], [0])],
    ['degreesOfFreedom[0]', () => effectiveDegreesOfFreedom([1], [Number.NaN])],
    ['probability', () => coverageFactor(5, 1)],
    ['degreesOfFreedom', () => coverageFactor(-5)],
  ])('refuse %s by name', (name, call) => {
    expect(call).toThrow(RangeError)
    expect(call).toThrow(name)
  })
})
