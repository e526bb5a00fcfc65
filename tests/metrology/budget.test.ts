import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { BudgetInput } from '#app/metrology/budget.ts'
import { combineBudget, uncertaintyBudget } from '#app/metrology/budget.ts'
import { effectiveDegreesOfFreedom } from '#app/metrology/coverage.ts'
import { studentQuantile } from '#app/statistics/distributions.ts'
import { moments } from '#app/statistics/moments.ts'
import { expectNear } from '#tests/support/near.ts'
import published from './data/uncertainty.json'

const MU_0 = 1.25663706127e-6
const C = 299_792_458

function pair([value, standardUncertainty]: number[]): BudgetInput {
  return { value: value as number, standardUncertainty: standardUncertainty as number }
}

describe('an uncertainty budget', () => {
  it('gives the end gauge of JCGM 100:2008, H.1', () => {
    const { data, expected, tolerance } = published.H1_end_gauge
    const uOfD = Math.hypot(...data.u_d_parts)
    expectNear(uOfD, expected.u_d, tolerance)
    const nuOfD = effectiveDegreesOfFreedom(data.u_d_parts, data.dof_d_parts)
    expectNear(nuOfD, expected.nu_d, tolerance)
    const budget = uncertaintyBudget({
      model: ({ lS, d, deltaAlpha, theta, alphaS, deltaTheta }) =>
        lS + d - lS * (deltaAlpha * theta + alphaS * deltaTheta),
      inputs: {
        lS: { value: data.l_S_nm, standardUncertainty: data.u_l_S, degreesOfFreedom: data.dof_l_S },
        d: { value: data.d_nm, standardUncertainty: uOfD, degreesOfFreedom: nuOfD },
        deltaAlpha: { value: 0, standardUncertainty: 1e-6 / Math.sqrt(3), degreesOfFreedom: 50 },
        // θ is its mean with 0.2 °C and a cyclic part of ±0.5 °C.
        theta: {
          value: data.theta_mean,
          standardUncertainty: Math.hypot(data.u_theta_mean, 0.5 / Math.SQRT2),
        },
        alphaS: {
          value: data.alpha_S,
          standardUncertainty: 2e-6 / Math.sqrt(3),
          distribution: 'rectangular',
        },
        deltaTheta: { value: 0, standardUncertainty: 0.05 / Math.sqrt(3), degreesOfFreedom: 2 },
      },
    })
    expectNear(budget.value, expected.l_nm, { rel: 1e-12 })
    const parts = expected.components_nm
    expectNear(budget.contributions.lS.contribution, parts.l_S, tolerance)
    expectNear(budget.contributions.d.contribution, parts.d, tolerance)
    expectNear(budget.contributions.deltaAlpha.contribution, parts.delta_alpha, tolerance)
    expectNear(budget.contributions.deltaTheta.contribution, parts.delta_theta, tolerance)
    expectNear(budget.contributions.theta.contribution, 0, { abs: 1e-9 })
    expectNear(budget.standardUncertainty, expected.uc_nm, tolerance)
    expect(Math.round(budget.standardUncertainty)).toBe(expected.printed.uc)
    expectNear(budget.effectiveDegreesOfFreedom, expected.nu_eff, tolerance)
    expect(Math.floor(budget.effectiveDegreesOfFreedom)).toBe(expected.printed.nu)
    const t99 = studentQuantile(0.995, Math.floor(budget.effectiveDegreesOfFreedom))
    expectNear(t99, expected.t99_16, tolerance)
    expectNear(t99 * budget.standardUncertainty, expected.U99_nm, tolerance)
  })

  it('gives resistance, reactance and impedance with their correlations (JCGM 100:2008, H.2)', () => {
    const { data, expected, tolerance } = published.H2_RXZ_correlated
    const observed = { V: data.V, I: data.I, phi: data.phi }
    const names = ['V', 'I', 'phi'] as const
    const summary = names.map((name) => moments(observed[name]))
    const inputs = {} as Record<(typeof names)[number], BudgetInput>
    names.forEach((name, i) => {
      const { mean, standardDeviation, count } = summary[i] as (typeof summary)[number]
      inputs[name] = {
        value: mean,
        standardUncertainty: standardDeviation / Math.sqrt(count),
        degreesOfFreedom: 4,
      }
      expectNear(mean, expected.full.means[i] as number, { rel: 1e-14 })
      expectNear(inputs[name].standardUncertainty, expected.full.u[i] as number, { rel: tolerance.full_rel })
    })
    const correlation = (a: (typeof names)[number], b: (typeof names)[number]): number => {
      const products = observed[a].map(
        (x, i) => (x - inputs[a].value) * ((observed[b][i] as number) - inputs[b].value),
      )
      const covariance = products.reduce((x, y) => x + y) / (5 * 4)
      return covariance / (inputs[a].standardUncertainty * inputs[b].standardUncertainty)
    }
    const correlations = [
      { a: 'V', b: 'I', r: correlation('V', 'I') },
      { a: 'V', b: 'phi', r: correlation('V', 'phi') },
      { a: 'I', b: 'phi', r: correlation('I', 'phi') },
    ]
    expectNear(correlations[0]?.r ?? 0, expected.full.r_VI, { rel: tolerance.full_rel })
    type Values = Record<(typeof names)[number], number>
    const budget = (model: (values: Values) => number) => uncertaintyBudget({ model, inputs, correlations })
    const resistance = budget(({ V, I, phi }) => (V / I) * Math.cos(phi))
    const reactance = budget(({ V, I, phi }) => (V / I) * Math.sin(phi))
    const impedance = budget(({ V, I }) => V / I)
    const { full, printed } = expected
    for (const [result, value, u, shownValue, shownU] of [
      [resistance, full.R, full.u_R, printed.R, printed.u_R],
      [reactance, full.X, full.u_X, printed.X, printed.u_X],
      [impedance, full.Z, full.u_Z, printed.Z, printed.u_Z],
    ] as const) {
      expectNear(result.value, value, { rel: tolerance.full_rel })
      expectNear(result.standardUncertainty, u, { rel: tolerance.full_rel })
      // Within one of the last printed digit: JCGM 100 rounds between its steps.
      expectNear(result.value, shownValue, { abs: 0.001 })
      expectNear(result.standardUncertainty, shownU, { abs: 0.001 })
      const shares = Object.values(result.contributions).map(({ share }) => share)
      expectNear(
        shares.reduce((a, b) => a + b),
        1,
        { abs: 1e-12 },
      )
      expect(result.isWelchSatterthwaiteValid).toBe(false)
    }
    // r(R, X) from the sum and difference of the two results.
    const correlationOfResults = (f: (values: Values) => number, g: (values: Values) => number): number => {
      const [uF, uG] = [budget(f).standardUncertainty, budget(g).standardUncertainty]
      const uSum = budget((values) => f(values) / uF + g(values) / uG).standardUncertainty
      return uSum ** 2 / 2 - 1
    }
    const r: (values: Values) => number = ({ V, I, phi }) => (V / I) * Math.cos(phi)
    const x: (values: Values) => number = ({ V, I, phi }) => (V / I) * Math.sin(phi)
    const z: (values: Values) => number = ({ V, I }) => V / I
    expectNear(correlationOfResults(r, x), full.r_RX, { rel: tolerance.full_rel })
    expectNear(correlationOfResults(r, z), full.r_RZ, { rel: tolerance.full_rel })
    expectNear(correlationOfResults(x, z), full.r_XZ, { rel: tolerance.full_rel })
    expectNear(correlationOfResults(x, z), printed.r_XZ, { abs: 0.001 })
  })

  it('gives the thermal expansion coefficient of NIST Technical Note 1900', () => {
    const { data, expected, tolerance } = published.NIST_TN1900_thermal_expansion
    const budget = uncertaintyBudget({
      model: ({ L0, L1, T0, T1 }) => (L1 - L0) / (L0 * (T1 - T0)),
      inputs: { L0: pair(data.L0), L1: pair(data.L1), T0: pair(data.T0), T1: pair(data.T1) },
    })
    expectNear(budget.value, expected.value, tolerance)
    expectNear(budget.standardUncertainty, expected.u, tolerance)
  })

  it('gives a product of powers whose inputs have twelve digits (NIST, Stefan-Boltzmann constant)', () => {
    const { data, expected, tolerance } = published.NIST_UM_stefan_boltzmann
    const budget = uncertaintyBudget({
      model: ({ h, R, Rinf, Ar, alpha }) =>
        (32 * Math.PI ** 5 * h * R ** 4 * Rinf ** 4) / (15 * Ar ** 4 * 0.001 ** 4 * C ** 6 * alpha ** 8),
      inputs: {
        h: pair(data.h),
        R: pair(data.R),
        Rinf: pair(data.Rinf),
        Ar: pair(data.Ar_e),
        alpha: pair(data.alpha),
      },
    })
    expectNear(budget.value, expected.value, tolerance)
    expectNear(budget.standardUncertainty, expected.u, tolerance)
    expectNear(budget.contributions.alpha.sensitivity, (-8 * budget.value) / (data.alpha[0] as number), {
      rel: 1e-8,
    })
  })

  it('gives e/m from voltage, current, radius and coil radius (computed by two other methods)', () => {
    const { data, expected, tolerance } = published.em_budget_1
    const budget = uncertaintyBudget({
      model: ({ V, I, r, R }) => {
        const field = (0.8 ** 1.5 * MU_0 * data.N * I) / R
        return (2 * V) / ((field * r) ** 2 - (V / C) ** 2)
      },
      inputs: {
        V: pair(data.V),
        I: pair(data.I),
        r: { ...pair(data.r), degreesOfFreedom: data.dof.r },
        R: { ...pair(data.R), common: true },
      },
    })
    const rel = tolerance.gum_rel
    expectNear(budget.value, expected.em, { rel: 1e-12 })
    expectNear(budget.standardUncertainty, expected.u_gum, { rel })
    for (const name of ['V', 'I', 'r', 'R'] as const) {
      const { contribution, share } = budget.contributions[name]
      expectNear(contribution, expected.components[name], { rel })
      expectNear(share, (expected.components[name] / expected.u_gum) ** 2, { rel: 3 * rel })
    }
    expectNear(budget.effectiveDegreesOfFreedom, expected.nu_eff, { rel: 1e-7 })
    expectNear(budget.coverageFactor, expected.k95, { rel: 1e-8 })
    expectNear(budget.expandedUncertainty, expected.k95 * expected.u_gum, { rel: 1e-7 })
    expectNear(budget.commonUncertainty, expected.components.R, { rel })
    expectNear(Math.hypot(budget.commonUncertainty, budget.independentUncertainty), expected.u_gum, { rel })
    expect(budget.isWelchSatterthwaiteValid).toBe(true)
  })

  it('gives the sensitivities of the centre field to radius and separation', () => {
    const { data, expected, tolerance } = published.B_sensitivity_R_s
    const budget = uncertaintyBudget({
      model: ({ R, s }) => (MU_0 * data.N * data.I * R ** 2) / (R ** 2 + s ** 2 / 4) ** 1.5,
      inputs: { R: pair(data.R), s: pair(data.s) },
    })
    expectNear(budget.value, expected.B, tolerance)
    expectNear(budget.standardUncertainty, expected.u_B, tolerance)
    expectNear(budget.contributions.R.sensitivity, expected.dB_dR, tolerance)
    expectNear(budget.contributions.s.sensitivity, expected.dB_ds, tolerance)
  })

  it('adds four equal inputs in quadrature (JCGM 101:2008, 9.2)', () => {
    const { normal, one_wide } = published.JCGM101_additive.expected
    const sum = (last: number) =>
      uncertaintyBudget({
        model: ({ a, b, c, d }) => a + b + c + d,
        inputs: { a: pair([0, 1]), b: pair([0, 1]), c: pair([0, 1]), d: pair([0, last]) },
      })
    expectNear(sum(1).standardUncertainty, normal.u, { rel: 1e-12 })
    expectNear(sum(1).expandedUncertainty, normal.endpoint, { rel: 1e-12 })
    expectNear(sum(10).standardUncertainty, one_wide.u, { rel: 1e-12 })
    expectNear(sum(10).expandedUncertainty, one_wide.guf_endpoint, { rel: 1e-12 })
  })
})

describe('sensitivities', () => {
  it('are partial derivatives, not differences over the uncertainty', () => {
    // Closed forms; the uncertainties are as large as the values or far smaller.
    for (const u of [1e-12, 1e-4, 1, 3]) {
      const { contributions } = uncertaintyBudget({
        model: ({ x, y }) => Math.exp(x) * Math.sin(y) + x ** 5,
        inputs: { x: pair([1.3, u]), y: pair([0.4, u]) },
      })
      expectNear(contributions.x.sensitivity, Math.exp(1.3) * Math.sin(0.4) + 5 * 1.3 ** 4, { rel: 1e-9 })
      expectNear(contributions.y.sensitivity, Math.exp(1.3) * Math.cos(0.4), { rel: 1e-9 })
    }
  })

  it('are found close to where the model ends, at zero, and for an offset far larger than its effect', () => {
    const at = (model: (x: number) => number, input: number[]): number =>
      uncertaintyBudget({ model: ({ x }) => model(x), inputs: { x: pair(input) } }).contributions.x
        .sensitivity
    expectNear(at(Math.sqrt, [1e-6, 1]), 500, { rel: 1e-7 })
    expectNear(at(Math.log, [0.001, 5]), 1000, { rel: 1e-7 })
    expectNear(at(Math.sin, [0, 0]), 1, { rel: 1e-9 })
    expectNear(
      at((x) => 1 / (x - 1e6), [1e6 + 2, 0.1]),
      -0.25,
      { rel: 1e-6 },
    )
    expect(at(() => 7, [3, 1])).toBe(0)
  })

  it('agree with closed forms for products of powers of any size', () => {
    const exponent = fc.integer({ min: -4, max: 4 })
    const value = fc.double({ min: -9, max: 9, noNaN: true }).map((power) => 10 ** power)
    const relative = fc.double({ min: -8, max: -0.3, noNaN: true }).map((power) => 10 ** power)
    fc.assert(
      fc.property(value, value, exponent, exponent, relative, (x, y, p, q, u) => {
        const budget = uncertaintyBudget({
          model: (values) => values.x ** p * values.y ** q,
          inputs: { x: pair([x, u * x]), y: pair([y, u * y]) },
        })
        expectNear(budget.contributions.x.sensitivity, (p * budget.value) / x, { rel: 1e-7 })
        expectNear(budget.contributions.y.sensitivity, (q * budget.value) / y, { rel: 1e-7 })
      }),
    )
  })
})

describe('correlations', () => {
  const inputs = { a: pair([5, 0.3]), b: pair([4, 0.4]) }
  const difference = (r: number) =>
    uncertaintyBudget({ model: ({ a, b }) => a - b, inputs, correlations: [{ a: 'a', b: 'b', r }] })

  it('of one add or subtract the contributions themselves', () => {
    expectNear(difference(1).standardUncertainty, 0.1, { rel: 1e-9 })
    expectNear(difference(-1).standardUncertainty, 0.7, { rel: 1e-9 })
    expectNear(difference(0).standardUncertainty, 0.5, { rel: 1e-9 })
  })

  it('leave the degrees of freedom valid where all are infinite', () => {
    expect(difference(0.5).isWelchSatterthwaiteValid).toBe(true)
    expect(difference(0.5).effectiveDegreesOfFreedom).toBe(Number.POSITIVE_INFINITY)
  })

  it('that no distribution can have are refused', () => {
    const three = { ...inputs, c: pair([1, 1]) }
    const call = (r: number) => () =>
      uncertaintyBudget({
        model: ({ a, b, c }) => a + b + c,
        inputs: three,
        correlations: [
          { a: 'a', b: 'b', r: 0.9 },
          { a: 'b', b: 'c', r: 0.9 },
          { a: 'a', b: 'c', r },
        ],
      })
    expect(call(-0.9)).toThrow(/correlations/)
    expect(call(0.7)().standardUncertainty).toBeGreaterThan(1)
  })
})

describe('a budget refuses by name', () => {
  const model = ({ x, y }: { x: number; y: number }) => x / y
  const good = { x: pair([1, 0.1]), y: pair([2, 0.1]) }
  it.each<[string, () => unknown]>([
    ['x.value', () => uncertaintyBudget({ model, inputs: { ...good, x: pair([Number.NaN, 1]) } })],
    ['y.standardUncertainty', () => uncertaintyBudget({ model, inputs: { ...good, y: pair([1, -1]) } })],
    [
      'y.degreesOfFreedom',
      () => uncertaintyBudget({ model, inputs: { ...good, y: { ...good.y, degreesOfFreedom: 0 } } }),
    ],
    ['model', () => uncertaintyBudget({ model, inputs: { ...good, y: pair([0, 1]) } })],
    ['inputs', () => uncertaintyBudget({ model: () => 1, inputs: {} })],
    [
      'correlations',
      () => uncertaintyBudget({ model, inputs: good, correlations: [{ a: 'x', b: 'z', r: 0 }] }),
    ],
    [
      'correlations',
      () => uncertaintyBudget({ model, inputs: good, correlations: [{ a: 'x', b: 'x', r: 1 }] }),
    ],
    [
      'correlations',
      () => uncertaintyBudget({ model, inputs: good, correlations: [{ a: 'x', b: 'y', r: 1.1 }] }),
    ],
    [
      'correlations',
      () =>
        uncertaintyBudget({
          model,
          inputs: good,
          correlations: [
            { a: 'x', b: 'y', r: 0.1 },
            { a: 'y', b: 'x', r: 0.1 },
          ],
        }),
    ],
    ['x must', () => uncertaintyBudget({ model: ({ x }) => (x === 1 ? 1 : Number.NaN), inputs: good })],
    ['value', () => combineBudget({ value: Number.NaN, inputs: good, sensitivities: { x: 1, y: 1 } })],
    [
      'sensitivities.y',
      () => combineBudget({ value: 1, inputs: good, sensitivities: { x: 1, y: Number.NaN } }),
    ],
  ])('%s', (name, call) => {
    expect(call).toThrow(RangeError)
    expect(call).toThrow(name)
  })

  it('and lets an error that is not about a range through', () => {
    const broken = () => {
      throw new TypeError('broken model')
    }
    expect(() => uncertaintyBudget({ model: broken, inputs: good })).toThrow(TypeError)
  })
})
