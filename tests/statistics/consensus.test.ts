import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import {
  algorithmA,
  analyseVariance,
  derSimonianLaird,
  mandelPaule,
  scores,
  weightedMean,
} from '#app/statistics/consensus.ts'
import { expectNear } from '#tests/support/near.ts'
import data from './data/consensus.json'

describe('Algorithm A', () => {
  // ISO 5725-5:1998, creosote; Analytical Methods Committee, Technical Brief 6 (2001).
  it.each(['algA_ISO5725_5_creosote', 'algA_AMC_brief6'] as const)(
    'comes to the fixed point of %s',
    (name) => {
      const { mean, standardDeviation } = algorithmA(data[name].data.values)
      expectNear(mean, data[name].expected.converged.x_star, { rel: 1e-8 })
      expectNear(standardDeviation, data[name].expected.converged.s_star, { rel: 1e-8 })
    },
  )

  it('without an outlier has the fixed point of the formulas', () => {
    const { mean, standardDeviation } = algorithmA(data.algA_no_outlier_limit.data.values)
    expectNear(mean, data.algA_no_outlier_limit.expected.x_star, { rel: 1e-9 })
    expectNear(standardDeviation, data.algA_no_outlier_limit.expected.s_star, { rel: 1e-8 })
  })

  it('does not stop at zero where more than half of the values are equal, and is zero where all are', () => {
    const { mean, standardDeviation } = algorithmA(data.algA_zero_mad.data.values)
    expect(Number.isFinite(mean)).toBe(true)
    expect(standardDeviation).toBeGreaterThanOrEqual(0)
    expect(algorithmA([5, 5, 5])).toEqual({ mean: 5, standardDeviation: 0 })
  })

  it('moves with a shift and grows with the unit', () => {
    fc.assert(
      fc.property(
        fc.array(fc.integer({ min: -500, max: 500 }), { minLength: 4, maxLength: 15 }),
        (values) => {
          const one = algorithmA(values)
          const other = algorithmA(values.map((value) => 7 + 2 * value))
          expectNear(other.mean, 7 + 2 * one.mean, { rel: 1e-6, abs: 1e-6 })
          expectNear(other.standardDeviation, 2 * one.standardDeviation, { rel: 1e-5, abs: 1e-6 })
        },
      ),
    )
  })
})

describe('A weighted mean and a consensus', () => {
  // Particle Data Group 2019, charged kaon mass.
  it('has the values of the charged kaon mass, Birge ratio and all', () => {
    const { v, u } = data.birge_charged_kaon.data
    const { plain_birge: plain } = data.birge_charged_kaon.expected
    const { mean, error, chiSquared, birgeRatio } = weightedMean(v, u)
    expectNear(mean, plain.mean, { abs: 1e-8 })
    expectNear(error, plain.u_internal, { rel: 1e-8 })
    expectNear(chiSquared, plain.chi2, { rel: 1e-8 })
    expectNear(birgeRatio, plain.birge, { rel: 1e-8 })
  })

  // R metafor 3.8 (W. Viechtbauer, J. Stat. Softw. 36(3)) on the kaon masses and on the BCG trials (JAMA 271 (1994) 698).
  it.each(['birge_charged_kaon', 'random_effects_BCG'] as const)('has the between variance of %s', (name) => {
    const { v, u } = data[name].data
    const { dersimonian_laird: dl, paule_mandel: pm } = data[name].expected
    const byMoments = derSimonianLaird(v, u)
    expectNear(byMoments.betweenVariance, dl.tau2, { rel: 1e-8 })
    expectNear(byMoments.mean, dl.mean, { rel: 1e-8 })
    expectNear(byMoments.error, dl.u, { rel: 1e-8 })
    const byBalance = mandelPaule(v, u)
    expectNear(byBalance.betweenVariance, pm.tau2, { rel: 1e-7 })
    expectNear(byBalance.mean, pm.mean, { rel: 1e-8 })
    expectNear(byBalance.error, pm.u, { rel: 1e-7 })
  })

  it('has no between variance where the values agree', () => {
    expect(mandelPaule([1, 1.1, 0.9], [1, 1, 1]).betweenVariance).toBe(0)
    expect(derSimonianLaird([1, 1.1, 0.9], [1, 1, 1]).betweenVariance).toBe(0)
  })

  it('is refused for an uncertainty that is none, and for lengths that differ', () => {
    expect(() => weightedMean([1, 2], [1, 0])).toThrow(/^errors\[1\]/)
    expect(() => mandelPaule([1, 2], [1])).toThrow(/^errors must be as many/)
    expect(() => derSimonianLaird([1], [1])).toThrow(/^values must be at least 2/)
    expect(() => algorithmA([1])).toThrow(/^values must be at least 2/)
  })
})

describe('Scores', () => {
  it('are those of ISO 13528', () => {
    const { data: d, expected } = data.scores_definitions
    const { z, zeta, en } = scores({
      value: d.x,
      standardUncertainty: d.u_x,
      expandedUncertainty: d.U_x,
      assigned: { value: d.assigned, standardUncertainty: d.u_assigned, expandedUncertainty: d.U_assigned },
      deviation: d.sigma_pt,
    })
    expectNear(z, expected.z, { rel: 1e-12 })
    expectNear(zeta, expected.zeta, { rel: 1e-12 })
    expectNear(en, expected.E_n, { rel: 1e-12 })
  })
})

describe('An analysis of variance', () => {
  it('of three groups has the F, p and components worked by hand', () => {
    // Means 2, 4 and 6, each 1 about its mean: between 24/2 = 12, within 6/6 = 1.
    const { f, p, degreesOfFreedom, betweenVariance, withinVariance } = analyseVariance([
      [1, 2, 3],
      [3, 4, 5],
      [5, 6, 7],
    ])
    expectNear(f, 12, { rel: 1e-12 })
    // For two and six degrees of freedom the upper tail is (1 + F/3)⁻³ in closed form.
    expectNear(p, (1 + 12 / 3) ** -3, { rel: 1e-10 })
    expect(degreesOfFreedom).toEqual({ between: 2, within: 6 })
    expectNear(betweenVariance, 11 / 3, { rel: 1e-12 })
    expectNear(withinVariance, 1, { rel: 1e-12 })
  })

  it('is refused for one group, and for groups of one value each', () => {
    expect(() => analyseVariance([[1, 2]])).toThrow(/^groups must be at least 2/)
    expect(() => analyseVariance([[1], [2]])).toThrow(/^groups must hold one/)
  })
})
