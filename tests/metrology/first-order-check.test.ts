import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { BudgetInput, Distribution } from '#app/metrology/budget.ts'
import { uncertaintyBudget } from '#app/metrology/budget.ts'
import { checkFirstOrder } from '#app/metrology/first-order-check.ts'
import { propagate } from '#app/metrology/monte-carlo.ts'
import { numericalTolerance } from '#app/metrology/numerical-tolerance.ts'
import { expectNear } from '#tests/support/near.ts'

describe('the numerical tolerance', () => {
  it('is half of the last stated digit (examples of JCGM 101:2008, 7.9.2, from memory)', () => {
    expect(numericalTolerance(0.00035, 2)).toBe(0.000005)
    expect(numericalTolerance(0.00035, 1)).toBe(0.00005)
    expect(numericalTolerance(2, 1)).toBe(0.5)
  })

  it('is that of the rounded uncertainty', () => {
    expect(numericalTolerance(0.0996, 2)).toBe(0.005)
    expect(numericalTolerance(0.0994, 2)).toBe(0.0005)
    expect(numericalTolerance(3.3e9, 2)).toBe(5e7)
    expect(numericalTolerance(0, 2)).toBe(0)
  })

  it.each<[string, () => unknown]>([
    ['standardUncertainty', () => numericalTolerance(-1, 2)],
    ['standardUncertainty', () => numericalTolerance(Number.NaN, 2)],
    ['digits', () => numericalTolerance(1, 0)],
    ['digits', () => numericalTolerance(1, 1.5)],
  ])('refuses %s by name', (name, call) => {
    expect(call).toThrow(RangeError)
    expect(call).toThrow(name)
  })
})

describe('the first order against Monte Carlo', () => {
  const budget = { value: 10, standardUncertainty: 0.51, expandedUncertainty: 1 }
  const check = (low: number, high: number, digits?: number) =>
    checkFirstOrder({ budget, monteCarlo: { shortestInterval: [low, high] }, digits })

  it('agrees where both ends are within the tolerance (JCGM 101:2008, 8.1)', () => {
    expect(check(9.04, 11.04)).toMatchObject({ agrees: true, tolerance: 0.05 })
    expect(check(9.04, 11.06).agrees).toBe(false)
    expect(check(8.94, 11.04).agrees).toBe(false)
    expect(check(9.04, 11.04, 2)).toMatchObject({ agrees: false, tolerance: 0.005 })
  })

  it('says at which end it is off, and which way', () => {
    const { lowDifference, highDifference } = check(9.3, 11.2)
    expectNear(lowDifference, -0.3, { abs: 1e-12 })
    expectNear(highDifference, -0.2, { abs: 1e-12 })
  })

  it.each<[string, () => unknown]>([
    [
      'budget.value',
      () =>
        checkFirstOrder({
          budget: { ...budget, value: Number.NaN },
          monteCarlo: { shortestInterval: [0, 1] },
        }),
    ],
    ['monteCarlo.shortestInterval', () => check(Number.NaN, 1)],
    ['digits', () => check(9, 11, 0)],
  ])('refuses %s by name', (name, call) => {
    expect(call).toThrow(RangeError)
    expect(call).toThrow(name)
  })

  const seeded = { seed: 20_261_201, numRuns: 25 }
  const real = (min: number, max: number) => fc.double({ min, max, noNaN: true })
  const distribution = fc.constantFrom<Distribution>('normal', 'rectangular', 'triangular', 'uShaped')

  it('gives the same deviation for a sum, whatever the distributions and factors', () => {
    const term = fc.record({
      value: real(-10, 10),
      standardUncertainty: real(0.01, 1),
      distribution,
      factor: real(-3, 3),
    })
    fc.assert(
      fc.property(fc.array(term, { minLength: 1, maxLength: 6 }), fc.nat(), (terms, seed) => {
        const inputs: Record<string, BudgetInput> = Object.fromEntries(terms.map((of, i) => [`x${i}`, of]))
        const model = (x: Record<string, number>) =>
          terms.reduce((sum, { factor }, i) => sum + factor * (x[`x${i}`] as number), 0)
        const first = uncertaintyBudget({ model, inputs })
        const monteCarlo = propagate({ model, inputs, samples: 50_000, seed })
        const u = first.standardUncertainty
        // Five standard deviations of the mean, and of the deviation of a normal result, which scatters most.
        expectNear(monteCarlo.mean, first.value, { abs: (5 * u) / Math.sqrt(50_000) + 1e-9 })
        expectNear(monteCarlo.standardUncertainty, u, { rel: 5 / Math.sqrt(100_000), abs: 1e-9 })
      }),
      seeded,
    )
  })

  it('agrees for e/m where the uncertainties are small and normal', () => {
    const relative = real(-4, -2.5).map((power) => 10 ** power)
    fc.assert(
      fc.property(
        fc.tuple(relative, relative, relative),
        real(-0.9, 0.9),
        fc.nat(),
        ([uV, uB, uR], r, seed) => {
          const at = (value: number, relative: number): BudgetInput => ({
            value,
            standardUncertainty: value * relative,
          })
          const problem = {
            model: ({ V, B, R }: { V: number; B: number; R: number }) =>
              (2 * V) / ((B * R) ** 2 - (V / 299_792_458) ** 2),
            inputs: { V: at(200, uV), B: at(1.2e-3, uB), R: at(0.04, uR) },
            correlations: [{ a: 'B', b: 'R', r }],
          }
          const first = uncertaintyBudget(problem)
          const monteCarlo = propagate({ ...problem, seed })
          expect(monteCarlo.isStable).toBe(true)
          expect(checkFirstOrder({ budget: first, monteCarlo }).agrees).toBe(true)
        },
      ),
      { ...seeded, numRuns: 12 },
    )
  })
})
