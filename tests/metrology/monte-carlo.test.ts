import { describe, expect, it } from 'vitest'
import type { BudgetInput } from '#app/metrology/budget.ts'
import { uncertaintyBudget } from '#app/metrology/budget.ts'
import { shortestInterval, symmetricInterval } from '#app/metrology/coverage-interval.ts'
import { checkFirstOrder } from '#app/metrology/first-order-check.ts'
import { propagate, startPropagation } from '#app/metrology/monte-carlo.ts'
import { studentQuantile } from '#app/statistics/distributions.ts'
import { moments } from '#app/statistics/moments.ts'
import { expectNear } from '#tests/support/near.ts'
import published from './data/uncertainty.json'

const MILLION = 1_000_000
const SEED = 101

function pair([value, standardUncertainty]: number[]): BudgetInput {
  return { value: value as number, standardUncertainty: standardUncertainty as number }
}

/** Between two bounds, evenly unless said otherwise. */
function between(low: number, high: number, distribution: 'rectangular' | 'uShaped' = 'rectangular') {
  const divisor = distribution === 'rectangular' ? Math.sqrt(3) : Math.SQRT2
  const standardUncertainty = (high - low) / 2 / divisor
  return { value: (low + high) / 2, standardUncertainty, distribution } satisfies BudgetInput
}

describe('Monte Carlo gives', () => {
  const { data, expected, tolerance } = published.JCGM101_additive
  it.each([
    ['four normal inputs', 'normal', 1, expected.normal],
    ['four rectangular inputs', 'rectangular', 1, expected.rectangular],
    ['four rectangular inputs, one ten times wider', 'rectangular', 10, expected.one_wide],
  ] as const)('the sum of %s (JCGM 101:2008, 9.2)', (_, distribution, last, { u, endpoint }) => {
    const unit: BudgetInput = { value: 0, standardUncertainty: 1, distribution }
    const result = propagate({
      model: ({ a, b, c, d }) => a + b + c + d,
      inputs: { a: unit, b: unit, c: unit, d: { ...unit, standardUncertainty: last } },
      samples: MILLION,
      seed: SEED,
      coverageProbability: data.p,
    })
    const allowed = { abs: tolerance.monte_carlo_1e6_abs }
    expectNear(result.mean, 0, { abs: (5 * u) / 1000 })
    expectNear(result.standardUncertainty, u, allowed)
    for (const [low, high] of [result.shortestInterval, result.symmetricInterval]) {
      expectNear(low, -endpoint, allowed)
      expectNear(high, endpoint, allowed)
    }
  })

  it('the logarithm of a rectangular input, where the first order is far off (NPL report DEM-ES-011)', () => {
    const { expected, tolerance } = published.NPL_log_uniform
    const problem = {
      model: ({ x }: { x: number }) => Math.log(x),
      inputs: { x: between(0.1, 1.1) },
    }
    const result = propagate({ ...problem, samples: MILLION, seed: SEED })
    const allowed = { abs: tolerance.monte_carlo_1e6_abs }
    expectNear(result.mean, expected.mean, allowed)
    expectNear(result.standardUncertainty, expected.u, allowed)
    expectNear(result.shortestInterval[0], expected.shortest[0] as number, allowed)
    expectNear(result.shortestInterval[1], expected.shortest[1] as number, allowed)
    const budget = uncertaintyBudget(problem)
    expectNear(budget.value, expected.gum.value, { rel: tolerance.closed_form_rel })
    expectNear(budget.standardUncertainty, expected.gum.u, { rel: tolerance.closed_form_rel })
    expect(checkFirstOrder({ budget, monteCarlo: result }).agrees).toBe(false)
  })

  it('the gauge block with its curvilinear trapezoids (JCGM 101:2008, 9.5)', () => {
    const { data, expected, tolerance } = published.JCGM101_gauge_block
    const t = (value: number, standardUncertainty: number, degreesOfFreedom: number): BudgetInput => ({
      value,
      standardUncertainty,
      degreesOfFreedom,
      distribution: 't',
    })
    const unit = between(0, 1)
    /** A rectangle between ± a whose half-width is itself known to ± d only (JCGM 101:2008, 6.4.3). */
    const trapezoid = (a: number, d: number, edge: number, along: number): number => {
      const low = -a - d + 2 * d * edge
      return low + (-low - low) * along
    }
    const result = propagate({
      model: (v) => {
        const deltaAlpha = trapezoid(1e-6, 0.1e-6, v.alphaEdge, v.alphaAlong)
        const deltaTheta = trapezoid(0.05, 0.025, v.thetaEdge, v.thetaAlong)
        const correction = v.LS * (deltaAlpha * (v.theta0 + v.Delta) + v.alphaS * deltaTheta)
        return v.LS + v.D + v.d1 + v.d2 - correction - 50e6
      },
      inputs: {
        LS: t(50_000_623, 25, 18),
        D: t(215, 6, 24),
        d1: t(0, 4, 5),
        d2: t(0, 7, 8),
        alphaS: between(9.5e-6, 13.5e-6),
        theta0: pair([-0.1, 0.2]),
        Delta: between(-0.5, 0.5, 'uShaped'),
        alphaEdge: unit,
        alphaAlong: unit,
        thetaEdge: unit,
        thetaAlong: unit,
      },
      samples: MILLION,
      seed: SEED,
      coverageProbability: data.p,
    })
    expectNear(result.mean, expected.mean, { abs: tolerance.mean_abs })
    expectNear(result.standardUncertainty, expected.u, { abs: tolerance.u_abs })
    expectNear(result.shortestInterval[0], expected.shortest99[0] as number, { abs: tolerance.interval_abs })
    expectNear(result.shortestInterval[1], expected.shortest99[1] as number, { abs: tolerance.interval_abs })
  })

  it('the terms of second order that the first order lacks (JCGM 100:2008, H.1.7)', () => {
    const { data, expected } = published.H1_end_gauge
    const result = propagate({
      model: ({ lS, d, deltaAlpha, theta, alphaS, deltaTheta }) =>
        lS + d - lS * (deltaAlpha * theta + alphaS * deltaTheta) - 50e6,
      inputs: {
        lS: pair([data.l_S_nm, data.u_l_S]),
        d: pair([data.d_nm, expected.u_d]),
        deltaAlpha: between(-1e-6, 1e-6),
        theta: pair([data.theta_mean, Math.hypot(data.u_theta_mean, 0.5 / Math.SQRT2)]),
        alphaS: between(9.5e-6, 13.5e-6),
        deltaTheta: between(-0.05, 0.05),
      },
      samples: MILLION,
      seed: SEED,
    })
    expectNear(result.standardUncertainty, expected.uc_with_second_order_nm, { rel: 0.003 })
    expect(Math.round(result.standardUncertainty)).toBe(expected.printed.uc2)
  })

  it('e/m from voltage, current, radius and coil radius (computed by another program)', () => {
    const { data, expected, tolerance } = published.em_budget_1
    const result = propagate({
      model: ({ V, I, r, R }) => {
        const field = (0.8 ** 1.5 * 1.25663706127e-6 * data.N * I) / R
        return (2 * V) / ((field * r) ** 2 - (V / 299_792_458) ** 2)
      },
      inputs: { V: pair(data.V), I: pair(data.I), r: pair(data.r), R: pair(data.R) },
      samples: MILLION,
      seed: SEED,
    })
    expectNear(result.mean, expected.mc_mean, { rel: tolerance.mc_mean_rel })
    expectNear(result.standardUncertainty, expected.mc_u, { rel: tolerance.mc_u_rel })
    expectNear(result.shortestInterval[0], expected.mc_shortest95[0] as number, {
      rel: tolerance.interval_rel,
    })
    expectNear(result.shortestInterval[1], expected.mc_shortest95[1] as number, {
      rel: tolerance.interval_rel,
    })
  })
})

describe('the distributions have the intervals of their closed forms', () => {
  const root = Math.sqrt(0.05)
  it.each<[BudgetInput['distribution'], number, number]>([
    ['normal', 1.959963984540054, 1],
    ['rectangular', 0.95 * Math.sqrt(3), 1],
    ['triangular', (1 - root) * Math.sqrt(6), 1],
    ['uShaped', Math.sin((Math.PI / 2) * 0.95) * Math.SQRT2, 1],
    // The standard uncertainty is the scale of t: the standard deviation is √(ν/(ν − 2)) times as large.
    ['t', studentQuantile(0.975, 7), Math.sqrt(7 / 5)],
  ])('%s', (distribution, halfWidth, deviation) => {
    const input: BudgetInput = { value: 5, standardUncertainty: 0.2, degreesOfFreedom: 7, distribution }
    const result = propagate({ model: ({ x }) => x, inputs: { x: input }, samples: 400_000, seed: SEED })
    expectNear(result.mean, 5, { abs: 0.002 })
    expectNear(result.standardUncertainty, 0.2 * deviation, { rel: 0.006 })
    expectNear(result.symmetricInterval[0], 5 - 0.2 * halfWidth, { abs: 0.004 })
    expectNear(result.symmetricInterval[1], 5 + 0.2 * halfWidth, { abs: 0.004 })
  })

  it('and t without degrees of freedom is normal', () => {
    const run = (distribution: BudgetInput['distribution']) =>
      propagate({
        model: ({ x }) => x,
        inputs: { x: { value: 0, standardUncertainty: 1, distribution } },
        samples: 1000,
        seed: 1,
      })
    expect(run('t')).toEqual(run('normal'))
    expect(run(undefined)).toEqual(run('normal'))
  })
})

describe('correlated inputs', () => {
  it('of a joint normal distribution give impedance its uncertainty (JCGM 100:2008, H.2)', () => {
    const { data, expected } = published.H2_RXZ_correlated
    const names = ['V', 'I', 'phi'] as const
    const inputs = {} as Record<(typeof names)[number], BudgetInput>
    for (const name of names) {
      const { mean, standardDeviation, count } = moments(data[name])
      inputs[name] = { value: mean, standardUncertainty: standardDeviation / Math.sqrt(count) }
    }
    const { r_VI, r_Vphi, r_Iphi } = expected.full
    const correlations = [
      { a: 'V', b: 'I', r: r_VI },
      { a: 'V', b: 'phi', r: r_Vphi },
      { a: 'phi', b: 'I', r: r_Iphi },
    ]
    const run = (model: (values: Record<(typeof names)[number], number>) => number) =>
      propagate({ model, inputs, correlations, samples: 400_000, seed: SEED })
    const { full } = expected
    for (const [result, value, u] of [
      [run(({ V, I, phi }) => (V / I) * Math.cos(phi)), full.R, full.u_R],
      [run(({ V, I, phi }) => (V / I) * Math.sin(phi)), full.X, full.u_X],
      [run(({ V, I }) => V / I), full.Z, full.u_Z],
    ] as const) {
      expectNear(result.mean, value, { abs: 0.01 * u })
      expectNear(result.standardUncertainty, u, { rel: 0.006 })
    }
  })

  it.each([1, -1])('may be tied to each other, r = %d', (r) => {
    const inputs = { a: pair([3, 0.1]), b: pair([5, 0.4]), c: pair([0, 1]) }
    const result = propagate({
      model: ({ a, b }) => (b - 5) / 0.4 - (r * (a - 3)) / 0.1,
      inputs,
      correlations: [{ a: 'a', b: 'b', r }],
      samples: 1000,
      seed: SEED,
    })
    expectNear(result.standardUncertainty, 0, { abs: 1e-12 })
  })

  it('of a joint t distribution have the t distribution in every combination', () => {
    const t: BudgetInput = { value: 0, standardUncertainty: 1, degreesOfFreedom: 5, distribution: 't' }
    for (const r of [0.6, 0]) {
      const result = propagate({
        model: ({ a, b }) => a - 2 * b,
        inputs: { a: t, b: t },
        correlations: [{ a: 'a', b: 'b', r }],
        samples: 400_000,
        seed: SEED,
        coverageProbability: 0.5,
      })
      const scale = Math.sqrt(1 + 4 - 4 * r)
      expectNear(result.standardUncertainty, scale * Math.sqrt(5 / 3), { rel: 0.01 })
      expectNear(result.symmetricInterval[1], scale * studentQuantile(0.75, 5), { rel: 0.01 })
    }
  })

  it('may hang together in a chain, in whatever order it is told', () => {
    const unit = pair([0, 1])
    const result = propagate({
      model: ({ a, b, c, d }) => a + b + c + d,
      inputs: { a: unit, b: unit, c: unit, d: unit },
      correlations: [
        { a: 'd', b: 'c', r: 0.4 },
        { a: 'a', b: 'b', r: 0.4 },
        { a: 'b', b: 'c', r: 0.4 },
      ],
      samples: 400_000,
      seed: SEED,
    })
    expectNear(result.standardUncertainty, Math.sqrt(4 + 6 * 0.4), { rel: 0.006 })
  })

  it('leave the others independent', () => {
    const unit = pair([0, 1])
    const result = propagate({
      model: ({ a, b, c, d }) => a + b + c + d,
      inputs: { a: unit, b: unit, c: unit, d: { ...unit, distribution: 'rectangular' } },
      correlations: [
        { a: 'a', b: 'c', r: 0.5 },
        { a: 'd', b: 'b', r: 0 },
      ],
      samples: 400_000,
      seed: SEED,
    })
    expectNear(result.standardUncertainty, Math.sqrt(5), { rel: 0.006 })
  })
})

describe('a propagation', () => {
  const problem = { model: ({ x }: { x: number }) => x * x, inputs: { x: pair([10, 0.1]) } }

  it('is the same for the same seed, and another for another', () => {
    const run = (seed: number) => propagate({ ...problem, samples: 20_000, seed })
    expect(run(5)).toEqual(run(5))
    expect(run(5).mean).not.toBe(run(6).mean)
  })

  it('goes on until all figures stand to the stated digits (JCGM 101:2008, 7.9)', () => {
    const at = (standardUncertainty: number, digits?: 1 | 2) =>
      propagate({ model: ({ x }) => x, inputs: { x: { value: 0, standardUncertainty } }, digits, seed: SEED })
    for (const [u, digits, tolerance] of [
      [1.2, 2, 0.05],
      [4.8, 2, 0.05],
      [4.8, 1, 0.5],
    ] as const) {
      const result = at(u, digits)
      expect(result.isStable).toBe(true)
      // Twice the standard deviation of each figure is inside the tolerance; three times must be.
      expectNear(result.mean, 0, { abs: 1.5 * tolerance })
      expectNear(result.standardUncertainty, u, { abs: 1.5 * tolerance })
      expectNear(result.shortestInterval[0], -1.959964 * u, { abs: 1.5 * tolerance })
      expectNear(result.shortestInterval[1], 1.959964 * u, { abs: 1.5 * tolerance })
    }
    // 9.6 needs a tolerance eight times finer for its size than 1.2.
    expect(at(9.6).samples).toBeGreaterThan(10 * at(1.2).samples)
    expect(at(9.6, 1).samples).toBe(100_000)
    expect(at(9.6)).toEqual(at(9.6, 2))
  })

  it('gives up where a figure does not settle', () => {
    // t with few degrees of freedom: the fourth moment is infinite, and so is the scatter of the deviation.
    const t: BudgetInput = { value: 0, standardUncertainty: 9.9, degreesOfFreedom: 2.05, distribution: 't' }
    const result = propagate({ model: ({ x }) => x, inputs: { x: t }, seed: SEED })
    expect(result).toMatchObject({ isStable: false, samples: 5_000_000 })
  })

  it('can be driven block by block and be stopped', () => {
    const running = startPropagation({ ...problem, samples: 25_000, seed: SEED })
    expect(() => running.progress).toThrow('samples')
    running.advance()
    expect(running.isDone).toBe(false)
    expect(running.progress.samples).toBe(10_000)
    expectNear(running.result().mean, 100.01, { abs: 0.1 })
    running.advance()
    running.advance()
    expect(running.isDone).toBe(true)
    running.advance()
    expect(running.result()).toEqual(propagate({ ...problem, samples: 25_000, seed: SEED }))
    expect(running.result().isStable).toBeNull()
  })

  it('has mean and deviation of all values, whatever the blocks are', () => {
    const values: number[] = []
    const result = propagate({
      // Drifts from block to block, as no model should.
      model: ({ x }) => {
        values.push(1e6 + x + values.length / 1000)
        return values.at(-1) as number
      },
      inputs: { x: pair([0, 1]) },
      samples: 34_567,
      seed: SEED,
    })
    const { mean, standardDeviation } = moments(values)
    expectNear(result.mean, mean, { rel: 1e-14 })
    expectNear(result.standardUncertainty, standardDeviation, { rel: 1e-10 })
    const sorted = Float64Array.from(values).sort()
    expect(result.symmetricInterval).toEqual(symmetricInterval(sorted, 0.95))
    expect(result.shortestInterval).toEqual(shortestInterval(sorted, 0.95))
  })

  it('counts every value into the histogram', () => {
    const { histogram, samples, mean, standardUncertainty } = propagate({ ...problem, seed: SEED, digits: 1 })
    const inside = histogram.counts.reduce((a, b) => a + b)
    expect(inside + histogram.below + histogram.above).toBe(samples)
    expect(histogram.below + histogram.above).toBeLessThan(samples / 1000)
    // The middle of the fullest bin lies near the mean, and the bins have the standard deviation.
    const width = (histogram.high - histogram.low) / histogram.counts.length
    const middle = (bin: number) => histogram.low + (bin + 0.5) * width
    const sum = (f: (x: number) => number) =>
      histogram.counts.reduce((total, count, bin) => total + count * f(middle(bin)), 0) / inside
    expectNear(
      sum((x) => x),
      mean,
      { abs: 0.01 * standardUncertainty },
    )
    expectNear(
      sum((x) => (x - mean) ** 2),
      standardUncertainty ** 2,
      { rel: 0.02 },
    )
  })

  it('of inputs without uncertainty is the value of the model', () => {
    const result = propagate({ ...problem, inputs: { x: pair([10, 0]) }, seed: SEED })
    expect(result).toMatchObject({
      mean: 100,
      standardUncertainty: 0,
      shortestInterval: [100, 100],
      isStable: true,
    })
  })
})

describe('Monte Carlo refuses by name', () => {
  const model = ({ x, y }: { x: number; y: number }) => x / y
  const good = { x: pair([1, 0.1]), y: pair([2, 0.1]) }
  const with_ = (change: object) => () => propagate({ model, inputs: good, seed: 1, samples: 100, ...change })
  const t: BudgetInput = { ...good.x, distribution: 't', degreesOfFreedom: 5 }
  const r = [{ a: 'x', b: 'y', r: 0.5 }]
  it.each<[string, () => unknown]>([
    ['x.value', with_({ inputs: { ...good, x: pair([Number.NaN, 1]) } })],
    ['y.standardUncertainty', with_({ inputs: { ...good, y: pair([1, -1]) } })],
    ['x.degreesOfFreedom', with_({ inputs: { ...good, x: { ...t, degreesOfFreedom: 2 } } })],
    ['x.distribution', with_({ inputs: { ...good, x: { ...good.x, distribution: 'flat' } } })],
    ['inputs', with_({ inputs: {} })],
    ['model', with_({ model: () => Number.NaN })],
    ['model', with_({ model: ({ x }: { x: number }) => Math.log(x - 1) })],
    ['samples', with_({ samples: 99 })],
    ['samples', with_({ samples: 1000.5 })],
    ['samples', with_({ samples: 1e9 })],
    ['samples', with_({ samples: Number.NaN })],
    ['digits', with_({ digits: 3 })],
    ['seed', with_({ seed: -1 })],
    ['seed', with_({ seed: Number.NaN })],
    ['coverageProbability', with_({ coverageProbability: 1 })],
    ['coverageProbability', with_({ coverageProbability: Number.NaN })],
    ['correlations', with_({ correlations: [{ a: 'x', b: 'z', r: 0.1 }] })],
    ['correlations', with_({ correlations: [{ a: 'x', b: 'y', r: 1.1 }] })],
    ['correlations', with_({ correlations: r, inputs: { ...good, x: t } })],
    ['correlations', with_({ correlations: r, inputs: { x: t, y: { ...t, degreesOfFreedom: 6 } } })],
    ['correlations', with_({ correlations: r, inputs: { ...good, y: between(1, 2) } })],
  ])('%s', (name, call) => {
    expect(call).toThrow(RangeError)
    expect(call).toThrow(name)
  })
})
