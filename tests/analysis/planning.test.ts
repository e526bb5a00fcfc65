import { describe, expect, it } from 'vitest'
import { chooseSettings, outlookOf, predictGrid, predictSetting } from '#app/analysis/planning.ts'
import { defaultPriors, effects, fitSeries, seriesPoints } from '#app/analysis/series-model.ts'
import { evennessFactor } from '#app/physics/orbit.ts'
import { expectNear } from '#tests/support/near.ts'
import { gaussian, settingsOf, simulate, simulatedConstant, simulatedField } from './series-data.ts'

const uncertainties = { uVoltage: 0.3, uCurrent: 0.003, uDiameter: 0.7e-3 }
const bench = {
  field: simulatedField,
  limits: {
    anodeVolts: 300,
    coilAmps: 2,
    leastAnodeVolts: 100,
    bulbRadiusMetres: 0.08,
    clearanceMetres: 0.002,
    gun: { xMetres: 0.05, yMetres: 0, direction: { x: 0, y: 1 } },
  },
  chargeToMass: simulatedConstant,
  uChargeToMass: 0.02 * simulatedConstant,
  uncertainties,
}
const grid = predictGrid(bench, {
  volts: [80, 120, 160, 200, 240, 280, 320],
  amps: [0.6, 0.9, 1.2, 1.5, 1.8],
  polarities: [1, -1],
})

describe('The prediction of a setting', () => {
  it('has the radius of the orbit, 2 % of e/m being 1 % of it, and refuses limit, glass and faint beam', () => {
    const { radiusMetres, uRadiusMetres, refused } = predictSetting(bench, {
      anodeVolts: 200,
      coilAmps: 1.5,
      polarity: 1,
    })
    // r = √(2V/η)/(kI), the relativistic term being 0.01 % of it.
    expectNear(radiusMetres, Math.sqrt(400 / simulatedConstant) / (7.4e-4 * 1.5), { rel: 2e-4 })
    expectNear(uRadiusMetres / radiusMetres, 0.01, { rel: 1e-12 })
    expect(refused).toBeNull()
    const of = (anodeVolts: number, coilAmps: number, polarity: 1 | -1 = 1) =>
      predictSetting(bench, { anodeVolts, coilAmps, polarity }).refused
    expect(of(310, 1.5)).toBe('limit')
    expect(of(200, 2.1)).toBe('limit')
    expect(of(90, 1.5)).toBe('faint')
    expect(of(290, 0.7)).toBe('glass')
    // With the gun off the axis the reversed beam bends out of the glass.
    expect(of(200, 1.5, -1)).toBe('glass')
  })

  it('takes the uneven field of a coil pair', () => {
    const coil = { turns: 130, radiusMetres: 0.15 }
    const pair = { coils: [coil, coil] as [typeof coil, typeof coil], separationMetres: 0.15 }
    const { evenness, radiusMetres } = predictSetting(
      { ...bench, field: { pair } },
      { anodeVolts: 250, coilAmps: 1.3, polarity: 1 },
    )
    expectNear(evenness, evennessFactor(pair, radiusMetres), { rel: 1e-6 })
    expect(evenness).not.toBe(1)
  })
})

describe('The outlook of a series', () => {
  it('is the uncertainty that a fit of such a series has', () => {
    const settings = settingsOf(12, [150, 200, 250, 300], [1.2, 1.5, 1.8], false)
    const truth = { strayFieldTesla: 0, voltageOffsetVolts: 0, scaleOffsetMetres: 0 }
    const fit = fitSeries(
      seriesPoints(simulate({ truth, settings, ...uncertainties }, gaussian(4)), simulatedField),
      {
        effects,
        priors: defaultPriors,
      },
    )
    const outlook = outlookOf(
      bench,
      settings.map(({ volts, amps, polarity }) => ({ anodeVolts: volts, coilAmps: amps, polarity })),
    )
    expectNear(outlook.relativeUncertainty, fit.standardUncertainty / fit.chargeToMass, { rel: 0.05 })
    expectNear(outlook.effects.strayFieldTesla, fit.sizes.strayFieldTesla?.standardUncertainty ?? 0, {
      rel: 0.05,
    })
    expect(outlook.told.strayFieldTesla).toBeGreaterThan(0)
    expect(outlook.told.strayFieldTesla).toBeLessThan(1)
  })
})

describe('The choice of settings', () => {
  it('knows e/m better than an even walk over the same settings, and takes none that cannot be set', () => {
    const chosen = chooseSettings(bench, { candidates: grid, count: 8, criterion: 'charge-to-mass' })
    expect(chosen).toHaveLength(8)
    expect(chosen.every(({ refused }) => refused === null)).toBe(true)
    const allowed = grid.filter(({ refused }) => refused === null)
    const walk = Array.from(
      { length: 8 },
      (_, i) => allowed[Math.floor((i * allowed.length) / 8)] ?? allowed[0],
    ).filter((it) => it !== undefined)
    expect(outlookOf(bench, chosen).relativeUncertainty).toBeLessThan(
      outlookOf(bench, walk).relativeUncertainty,
    )
  })

  it('reaches the best of all pairs of settings', () => {
    const few = grid.filter(({ refused }) => refused === null).slice(0, 8)
    const worth = (settings: typeof few) => {
      const { relativeUncertainty, effects: sizes } = outlookOf(bench, settings)
      return { relativeUncertainty, sizes }
    }
    const [first, second] = chooseSettings(bench, { candidates: few, count: 2, criterion: 'charge-to-mass' })
    const best = Math.min(...few.flatMap((a) => few.map((b) => worth([a, b]).relativeUncertainty)))
    if (!first || !second) throw new Error('nothing chosen')
    expectNear(worth([first, second]).relativeUncertainty, best, { rel: 1e-9 })
  })

  it('is refused where no candidate can be set, and for a count that is none', () => {
    const glass = grid.filter(({ refused }) => refused === 'glass')
    expect(() => chooseSettings(bench, { candidates: glass, count: 3, criterion: 'all' })).toThrow(
      /^candidates/,
    )
    expect(() => chooseSettings(bench, { candidates: grid, count: 0, criterion: 'all' })).toThrow(/^count/)
  })
})
