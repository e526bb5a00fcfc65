import { describe, expect, it } from 'vitest'
import { acceptedChargeToMass } from '#app/physics/accepted-value.ts'
import * as constants from '#app/physics/constants.ts'
import { expectNear } from '#tests/support/near.ts'
import codata from './data/codata.json'

const { elementaryCharge, speedOfLight, vacuumPermeability } = constants

describe('the constants are those of CODATA 2022 (Rev. Mod. Phys. 97, 025002)', () => {
  it.each([
    ['elementary charge', elementaryCharge, codata.e.expected],
    ['speed of light', speedOfLight, codata.c.expected],
    ['vacuum permeability', vacuumPermeability, codata.mu0_2022.expected],
  ])('%s', (_name, constant, expected) => {
    expect(constant.value).toBe(expected.value)
    expect(constant.standardUncertainty).toBe(expected.standard_uncertainty)
    expect(constant.year).toBe(2022)
    expect(constant.source).toContain('CODATA')
  })

  it('holds the magnitude of the charge-to-mass quotient', () => {
    expect(acceptedChargeToMass.value).toBe(Math.abs(codata.e_over_m_2022.expected.value))
    expect(acceptedChargeToMass.standardUncertainty).toBe(codata.e_over_m_2022.expected.standard_uncertainty)
  })

  it('has the quotient of charge and mass, also from the rest energy', () => {
    const { data, tolerance } = codata.quotient_consistency_2022
    expectNear(data.e / data.m_e, acceptedChargeToMass.value, tolerance)
    expect(data.e).toBe(elementaryCharge.value)
    expect(data.m_e).toBe(codata.m_e_2022.expected.value)
    // mc²/e in volts is 10⁶ times the rest energy in MeV.
    const restVolts = speedOfLight.value ** 2 / acceptedChargeToMass.value
    expectNear(restVolts, codata.mec2_MeV_2022.expected.value * 1e6, { rel: 1e-9 })
  })

  it('differs from 4π × 10⁻⁷ by the published amount', () => {
    const { expected } = codata['mu0_minus_4pi_1e-7']
    const difference = vacuumPermeability.value / (4 * Math.PI * 1e-7) - 1
    expectNear(difference, expected.rel_difference, { abs: 1e-14 })
  })

  it('lies within a few standard uncertainties of the adjustments since 2006, and is none of them', () => {
    for (const earlier of [
      codata.e_over_m_2018,
      codata.e_over_m_CODATA_2014,
      codata.e_over_m_CODATA_2010,
      codata.e_over_m_CODATA_2006,
    ]) {
      const off = Math.abs(acceptedChargeToMass.value - Math.abs(earlier.expected.value))
      expect(off).toBeGreaterThan(0)
      expect(off).toBeLessThan(5 * earlier.expected.standard_uncertainty)
    }
    for (const [now, before] of [
      [vacuumPermeability.value, codata.mu0_2018],
      [codata.m_e_2022.expected.value, codata.m_e_2018],
    ] as const) {
      expect(now).not.toBe(before.expected.value)
      expectNear(now, before.expected.value, { abs: 5 * before.expected.standard_uncertainty })
    }
  })

  it('does not let the quotient or the mass out of the public constants', () => {
    const text = JSON.stringify(Object.values(constants))
    expect(text).not.toMatch(/1\.?758|9\.1093/)
  })
})
