import { describe, expect, it } from 'vitest'
import type { BudgetBench, Reading, ReadingBench } from '#app/analysis/reading.ts'
import { readingBudget } from '#app/analysis/reading.ts'
import { readingProblem, seriesProblem } from '#app/analysis/reading-model.ts'
import { uncertaintyBudget } from '#app/metrology/budget.ts'
import { checkFirstOrder } from '#app/metrology/first-order-check.ts'
import { propagate, startRowPropagation } from '#app/metrology/monte-carlo.ts'
import { centreFieldTesla } from '#app/physics/coil-field.ts'
import { expectNear } from '#tests/support/near.ts'
import { axisGun, bottomGun, sideGun } from './benches.ts'

const reading: Reading = {
  voltageVolts: 250,
  uVoltageVolts: 0.03,
  voltageDegreesOfFreedom: 14,
  currentAmps: 1.3,
  uCurrentAmps: 0.0004,
  currentDegreesOfFreedom: 22,
  leftEdges: [-0.0612, -0.0608, -0.0617],
  rightEdges: [0.0605, 0.0611, 0.0609],
  edgeSpread: { standardDeviationMetres: 0.0005, degreesOfFreedom: 11 },
}
const verified: ReadingBench = {
  ...bottomGun,
  anodeMeter: { ...bottomGun.anodeMeter, correctionVolts: 0.6, uCorrectionVolts: 0.15 },
}
const photo = {
  diameterMetres: 0.1215,
  uCircleMetres: 0.0002,
  circleDegreesOfFreedom: 9,
  uScaleMetres: 0.0003,
  scaleDegreesOfFreedom: 4,
}

describe('one reading as a model and its inputs', () => {
  const measured = {
    teslaPerAmp: 1.01 * centreFieldTesla(sideGun.coilPair, 1),
    standardUncertainty: 2e-6,
  }
  const { coilConnection, beam, anodeMeter, coilMeter } = sideGun
  const meters = { coilConnection, beam, anodeMeter, coilMeter }
  const cases: [string, Reading & { bench: BudgetBench }][] = [
    ['a ruler behind the beam and a verified meter', { ...reading, bench: verified }],
    ['a mirror scale', { ...reading, bench: sideGun, leftEdges: [-0.04], rightEdges: [0.04] }],
    [
      'thick coils in parallel',
      { ...reading, bench: axisGun, currentAmps: 2.1, leftEdges: [-0.09], rightEdges: [0] },
    ],
    ['a measured field factor', { ...reading, bench: { ...bottomGun, fieldFactor: measured } }],
    [
      'the sense reversed',
      { ...reading, bench: axisGun, currentAmps: -2.1, leftEdges: [0], rightEdges: [0.09] },
    ],
    ['people with and without photos', { ...reading, bench: verified, photos: [photo] }],
    [
      'a rung, and a field of which the factor alone is known',
      {
        ...reading,
        leftEdges: [],
        rightEdges: [],
        bench: { ...meters, scale: { kind: 'rungs' }, coilPair: null, fieldFactor: measured },
        given: { source: 'rung', diameterMetres: 0.1, uDiameterMetres: 0.0002, settingHalfWidthAmps: 0.004 },
      },
    ],
    [
      'a stated diameter',
      {
        ...reading,
        leftEdges: [],
        rightEdges: [],
        bench: verified,
        given: { source: 'stated', diameterMetres: 0.12, uDiameterMetres: 0.0005 },
      },
    ],
    ['photos alone', { ...reading, bench: verified, leftEdges: [], rightEdges: [], photos: [photo, photo] }],
  ]
  it.each(cases)('has the budget of the reading: %s', (_, of) => {
    const direct = readingBudget(of)
    const budget = uncertaintyBudget(readingProblem(of))
    expectNear(budget.value, direct.value, { rel: 1e-12 })
    expectNear(budget.standardUncertainty, direct.standardUncertainty, { rel: 1e-7 })
    expectNear(budget.commonUncertainty, direct.commonUncertainty, { rel: 1e-7 })
    expectNear(budget.effectiveDegreesOfFreedom, direct.effectiveDegreesOfFreedom, { rel: 1e-6 })
    expectNear(budget.expandedUncertainty, direct.expandedUncertainty, { rel: 1e-7 })
    expect(Object.keys(budget.contributions)).toEqual(Object.keys(direct.contributions))
    for (const [name, { sensitivity, contribution }] of Object.entries(direct.contributions)) {
      expectNear(budget.contributions[name]?.sensitivity ?? Number.NaN, sensitivity, { rel: 1e-7 })
      expectNear(budget.contributions[name]?.contribution ?? Number.NaN, contribution, { rel: 1e-7 })
    }
  })

  it('agrees with Monte Carlo to one digit where its inputs are known well', () => {
    const problem = readingProblem({ ...reading, bench: verified })
    const inputs = Object.fromEntries(
      Object.entries(problem.inputs).map(([name, input]) => [
        name,
        { ...input, distribution: 'normal' as const, standardUncertainty: input.standardUncertainty / 4 },
      ]),
    )
    for (const input of Object.values(inputs)) delete input.degreesOfFreedom
    const monteCarlo = propagate({ ...problem, inputs, seed: 20 })
    const budget = uncertaintyBudget({ ...problem, inputs })
    expect(monteCarlo.isStable).toBe(true)
    expect(checkFirstOrder({ budget, monteCarlo }).agrees).toBe(true)
    expectNear(monteCarlo.standardUncertainty, budget.standardUncertainty, { rel: 0.005 })
  })

  it('samples what has bounds evenly, and what has finite degrees of freedom as t', () => {
    const { inputs } = readingProblem({ ...reading, bench: verified })
    const shapes = Object.fromEntries(
      Object.entries(inputs).map(([name, { distribution }]) => [name, distribution]),
    )
    expect(shapes).toEqual({
      anodeVoltage: 't',
      anodeResolution: 'rectangular',
      anodeMeter: 'rectangular',
      anodeCorrection: 'normal',
      coilCurrent: 't',
      coilResolution: 'rectangular',
      coilMeter: 'rectangular',
      leftEdgeResolution: 'rectangular',
      rightEdgeResolution: 'rectangular',
      edgeSpread: 't',
      scaleDistance: 'normal',
      coilTurns: 'normal',
      coilRadius: 'normal',
      coilSeparation: 'normal',
      beamEdge: 'rectangular',
    })
  })

  it('is refused where two people alone tell the spread, and not where two degrees of freedom hardly count', () => {
    const run = (change: Partial<Reading>) => () =>
      propagate({ ...readingProblem({ ...reading, ...change, bench: verified }), seed: 1, samples: 1000 })
    expect(run({ edgeSpread: { standardDeviationMetres: 0.0005, degreesOfFreedom: 1 } })).toThrow(
      'edgeSpread.degreesOfFreedom',
    )
    expect(run({ voltageDegreesOfFreedom: 1 })().samples).toBe(1000)
  })

  it('throws what e/m throws where the values belong to no orbit', () => {
    const { model, inputs } = readingProblem({ ...reading, bench: verified })
    const values = Object.fromEntries(Object.entries(inputs).map(([name, { value }]) => [name, value]))
    expect(() => model({ ...values, anodeVoltage: -1 })).toThrow('voltageVolts')
    expect(() => model({ ...values, edgeSpread: -0.2 })).toThrow('radiusMetres')
    expect(model({ ...values, edgeSpread: 0.2 })).toBeGreaterThan(0)
  })
})

describe('the readings of a run as a model and its inputs', () => {
  const bench: ReadingBench = { ...axisGun, scale: bottomGun.scale, anodeMeter: verified.anodeMeter }
  const settings = [
    [250, 2.1],
    [200, 2.0],
    [300, -2.4],
    [180, 1.9],
  ] as const
  const readings = settings.map(([voltageVolts, currentAmps], i): Reading => {
    const half = 0.061 * Math.sqrt(voltageVolts / 250) * (2.1 / Math.abs(currentAmps))
    return { ...reading, voltageVolts, currentAmps, leftEdges: [-half - i * 1e-4], rightEdges: [half] }
  })
  const budgets = readings.map((of) => readingBudget({ ...of, bench }))

  it('divides the independent part of the mean by √n and keeps the common part', () => {
    const { names, inputs, evaluate, correlations } = seriesProblem({ bench, readings })
    const budget = uncertaintyBudget({
      inputs: Object.fromEntries(names.map((name, i) => [name, inputs[i] as (typeof inputs)[number]])),
      model: (values) => evaluate(Float64Array.from(names, (name) => values[name] as number)),
      correlations,
    })
    const mean = (list: number[]) => list.reduce((a, b) => a + b, 0) / list.length
    expectNear(budget.value, mean(budgets.map(({ value }) => value)), { rel: 1e-12 })
    expectNear(
      budget.independentUncertainty,
      Math.hypot(...budgets.map(({ independentUncertainty }) => independentUncertainty)) / readings.length,
      { rel: 1e-7 },
    )
    const shared = Object.entries(budgets[0]?.contributions ?? {}).filter(([, { common }]) => common)
    const common = shared.map(([name]) =>
      mean(
        budgets.map(({ contributions }) => {
          const { sensitivity = 0, standardUncertainty = 0 } = contributions[name] ?? {}
          return sensitivity * standardUncertainty
        }),
      ),
    )
    expectNear(budget.commonUncertainty, Math.hypot(...common), { rel: 1e-7 })
  })

  it('is what one reading is, where there is only one', () => {
    const monteCarlo = startRowPropagation({
      ...seriesProblem({ bench, readings: readings.slice(0, 1) }),
      samples: 200_000,
      seed: 4,
    })
    while (!monteCarlo.isDone) monteCarlo.advance()
    const alone = propagate({
      ...readingProblem({ ...(readings[0] as Reading), bench }),
      samples: 200_000,
      seed: 4,
    })
    expectNear(monteCarlo.result().mean, alone.mean, { rel: 1e-9 })
    expectNear(monteCarlo.result().standardUncertainty, alone.standardUncertainty, { rel: 1e-9 })
  })

  it('does not average out how badly a pooled spread is known', () => {
    // Nothing but the spread of the edges, of 4 degrees of freedom: its scale is the same error in all readings.
    const many = Array.from(
      { length: 12 },
      (): Reading => ({
        ...(readings[0] as Reading),
        edgeSpread: { standardDeviationMetres: 0.0004, degreesOfFreedom: 4 },
      }),
    )
    const problem = seriesProblem({ bench, readings: many })
    const run = (pooled: boolean) => {
      const running = startRowPropagation({
        ...problem,
        correlations: pooled ? problem.correlations : [],
        inputs: problem.inputs.map((input, i) =>
          problem.names[i]?.startsWith('edgeSpread') ? input : { ...input, standardUncertainty: 0 },
        ),
        samples: 100_000,
        seed: 5,
        coverageProbability: 0.5,
      })
      while (!running.isDone) running.advance()
      const { shortestInterval, standardUncertainty } = running.result()
      return (shortestInterval[1] - shortestInterval[0]) / (2 * standardUncertainty)
    }
    // Half of t(4) lies within 0.7407 scales, of which √2 make a standard deviation; of the sum of twelve independent
    // ones, nearly normal, within 0.674 standard deviations.
    expectNear(run(true), 0.740697 / Math.SQRT2, { rel: 0.02 })
    expect(run(false)).toBeGreaterThan(0.6)
  })

  it('refuses an empty run by name', () => {
    expect(() => seriesProblem({ bench, readings: [] })).toThrow('readings')
  })
})
