import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import {
  advanceCoilTemperature,
  COPPER_ALPHA_20,
  COPPER_ZERO_RESISTANCE,
  coilResistanceOhms,
  coilTemperatureCelsius,
  predictCoilTemperature,
} from '#app/physics/coil-heating.ts'
import { expectNear } from '#tests/support/near.ts'
import copper from './data/copper.json'

describe('coil temperature from resistance', () => {
  it('uses the copper of IEC 60028', () => {
    expect(COPPER_ALPHA_20).toBe(copper.copper_constants.expected.alpha20_per_K)
    expectNear(-COPPER_ZERO_RESISTANCE, copper.copper_constants.expected.inferred_zero_resistance_C, {
      rel: 1e-12,
    })
  })

  const { expected, tolerance } = copper.coil_temperature
  it.each(expected)('$V V and $I A on $R20 Ω at 20 °C', (row) => {
    expectNear(row.V / row.I, row.R, { rel: 1e-12 })
    const temperature = coilTemperatureCelsius({
      resistanceOhms: row.V / row.I,
      referenceOhms: row.R20,
      referenceCelsius: 20,
    })
    expectNear(temperature, row.T_C, tolerance)
  })

  it('refers α₂₀ to 20 °C also when the reference was taken at another temperature', () => {
    const { data, expected: ratio, tolerance: allowed } = copper.R_ratio_two_temperatures
    expectNear(COPPER_ZERO_RESISTANCE, ratio.k, allowed)
    const temperature = coilTemperatureCelsius({
      resistanceOhms: ratio.ratio * 4.3,
      referenceOhms: 4.3,
      referenceCelsius: data.t1,
    })
    expectNear(temperature, data.t2, allowed)
    expectNear(
      coilResistanceOhms({ temperatureCelsius: data.t2, referenceOhms: 1, referenceCelsius: data.t1 }),
      ratio.ratio,
      allowed,
    )
  })

  it('refuses bad arguments by name', () => {
    const good = { resistanceOhms: 4.5, referenceOhms: 4.3, referenceCelsius: 20 }
    for (const name of Object.keys(good)) {
      for (const bad of [-300, Number.NaN, Number.POSITIVE_INFINITY]) {
        expect(() => coilTemperatureCelsius({ ...good, [name]: bad })).toThrow(RangeError)
        expect(() => coilTemperatureCelsius({ ...good, [name]: bad })).toThrow(name)
      }
    }
    expect(() => coilTemperatureCelsius({ ...good, resistanceOhms: 0 })).toThrow('resistanceOhms')
  })
})

describe('heating and cooling of a coil', () => {
  const coil = {
    temperatureCelsius: 40,
    ambientCelsius: 20,
    powerWatts: 9,
    kelvinPerWatt: 3,
    timeConstantSeconds: 600,
    durationSeconds: 600,
  }

  it('follows the exponential of a single time constant', () => {
    // Closed form: steady 20 + 27 = 47 °C, 7 K away now, 7/e K away after one time constant.
    expectNear(advanceCoilTemperature(coil), 47 - 7 / Math.E, { rel: 1e-14 })
    expectNear(advanceCoilTemperature({ ...coil, powerWatts: 0 }), 20 + 20 / Math.E, { rel: 1e-14 })
    expect(advanceCoilTemperature({ ...coil, durationSeconds: 0 })).toBe(40)
  })

  it('does not depend on how the time is divided', () => {
    fc.assert(
      fc.property(fc.double({ min: 0, max: 600, noNaN: true }), (part) => {
        const first = advanceCoilTemperature({ ...coil, durationSeconds: part })
        const rest = { ...coil, temperatureCelsius: first, durationSeconds: 600 - part }
        expectNear(advanceCoilTemperature(rest), advanceCoilTemperature(coil), { rel: 1e-13 })
      }),
    )
  })

  const setting = {
    temperatureCelsius: 25,
    ambientCelsius: 22,
    currentAmps: 2.5,
    referenceOhms: 4.8,
    referenceCelsius: 20,
    kelvinPerWatt: 1.5,
    timeConstantSeconds: 500,
    limitCelsius: 60,
  }

  it('predicts the steady temperature and the time to the limit as small steps reach them', () => {
    const { steadyCelsius, secondsToLimit } = predictCoilTemperature(setting)
    let temperature = setting.temperatureCelsius
    let reached: number | null = null
    for (let step = 0; step < 200_000; step++) {
      const resistance = coilResistanceOhms({ ...setting, temperatureCelsius: temperature })
      const next = advanceCoilTemperature({
        ...setting,
        temperatureCelsius: temperature,
        powerWatts: setting.currentAmps ** 2 * resistance,
        durationSeconds: 0.1,
      })
      if (reached === null && next >= setting.limitCelsius) reached = step * 0.1
      temperature = next
    }
    expectNear(steadyCelsius ?? Number.NaN, temperature, { abs: 0.001 })
    expectNear(secondsToLimit ?? Number.NaN, reached ?? Number.NaN, { abs: 0.5 })
  })

  it('says so when the limit is there already, is never reached, or nothing holds the temperature', () => {
    expect(predictCoilTemperature({ ...setting, temperatureCelsius: 61 }).secondsToLimit).toBe(0)
    expect(predictCoilTemperature({ ...setting, currentAmps: 0.5 }).secondsToLimit).toBeNull()
    expect(predictCoilTemperature({ ...setting, currentAmps: 0 })).toEqual({
      steadyCelsius: 22,
      secondsToLimit: null,
    })
    const runaway = predictCoilTemperature({ ...setting, kelvinPerWatt: 10 })
    expect(runaway.steadyCelsius).toBeNull()
    expect(runaway.secondsToLimit).toBeGreaterThan(0)
  })

  it('refuses bad arguments by name', () => {
    for (const name of Object.keys(coil)) {
      expect(() => advanceCoilTemperature({ ...coil, [name]: Number.NaN })).toThrow(RangeError)
      expect(() => advanceCoilTemperature({ ...coil, [name]: Number.NaN })).toThrow(name)
    }
    for (const name of Object.keys(setting)) {
      expect(() => predictCoilTemperature({ ...setting, [name]: Number.NaN })).toThrow(RangeError)
      expect(() => predictCoilTemperature({ ...setting, [name]: Number.NaN })).toThrow(name)
    }
  })
})
