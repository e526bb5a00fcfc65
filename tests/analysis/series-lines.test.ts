import { describe, expect, it } from 'vitest'
import { fitSeriesLine, linePoints } from '#app/analysis/series-lines.ts'
import { expectNear } from '#tests/support/near.ts'
import classReadings from './data/class-readings.json'
import {
  classField,
  classSeries,
  gaussian,
  settingsOf,
  simulate,
  simulatedConstant,
  simulatedField,
} from './series-data.ts'

const { expected } = classReadings.cases.class_24

describe('The lines of a series', () => {
  // Worked out with numpy from the same readings.
  it('have the slopes and intercepts of an independent fit of the class readings', () => {
    const of = (line: 'origin' | 'intercept' | 'root') =>
      fitSeriesLine(classSeries, classField, { line, method: 'ordinary' })
    expectNear(of('origin').chargeToMass, expected.slope_through_origin_V_on_half_kIr_squared, { rel: 1e-6 })
    expectNear(of('intercept').chargeToMass, expected.line_slope, { rel: 1e-6 })
    expectNear(of('intercept').second?.value ?? 0, expected.line_intercept_V, { rel: 1e-6 })
    expectNear(of('root').chargeToMass, expected.sqrt_form_em, { rel: 1e-6 })
    expectNear(of('root').second?.value ?? 0, expected.sqrt_form_stray_field_T, { rel: 1e-6 })
  })

  it('of readings without any error are exact by every method, reversed pairs and a stray field too', () => {
    const truth = { strayFieldTesla: 40e-6, voltageOffsetVolts: 0, scaleOffsetMetres: 0 }
    const settings = settingsOf(8, [150, 200, 250, 300], [1.2, 1.7], true)
    const exact = simulate({ truth, settings, uVoltage: 0, uCurrent: 0, uDiameter: 0 }, gaussian(1))
    const readings = exact.map((reading) => ({
      ...reading,
      uVoltage: 0.3,
      uCurrent: 0.003,
      uDiameter: 0.5e-3,
    }))
    for (const method of ['ordinary', 'weighted', 'both-errors'] as const) {
      const { chargeToMass, second } = fitSeriesLine(readings, simulatedField, { line: 'root', method })
      expectNear(chargeToMass, simulatedConstant, { rel: 1e-9 })
      expectNear(second?.value ?? 0, 40e-6, { rel: 1e-9 })
    }
  })

  it('have points with the uncertainties of their readings', () => {
    const [reading] = classSeries
    if (!reading) throw new Error('no reading')
    const [point] = linePoints([reading], classField, 'intercept')
    const step = 1e-6
    const moved = linePoints(
      [{ ...reading, diameterMetres: reading.diameterMetres + step }],
      classField,
      'intercept',
    )
    const perMetre = ((moved[0]?.x ?? 0) - (point?.x ?? 0)) / step
    const only = linePoints([{ ...reading, uCurrent: 0 }], classField, 'intercept')
    expectNear(only[0]?.ux ?? 0, perMetre * reading.uDiameter, { rel: 1e-4 })
  })

  it('through the origin with errors in both coordinates is the weighted line where x has none', () => {
    const certain = classSeries.map((reading) => ({ ...reading, uCurrent: 0, uDiameter: 0 }))
    const weighted = fitSeriesLine(certain, classField, { line: 'origin', method: 'weighted' })
    const both = fitSeriesLine(certain, classField, { line: 'origin', method: 'both-errors' })
    expectNear(both.chargeToMass, weighted.chargeToMass, { rel: 1e-12 })
    expect(both.fit.pValue).toBe(weighted.fit.pValue)
  })

  it('are refused with the argument where the readings carry none', () => {
    expect(() =>
      fitSeriesLine(classSeries.slice(0, 1), classField, { line: 'intercept', method: 'ordinary' }),
    ).toThrow(/^x must have at least 2/)
    const certain = classSeries.map((reading) => ({ ...reading, uVoltage: 0 }))
    expect(() => fitSeriesLine(certain, classField, { line: 'origin', method: 'weighted' })).toThrow(
      /^readings\[0\]\.uVoltage/,
    )
  })
})
