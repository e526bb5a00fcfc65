import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { acceptedChargeToMass } from '#app/physics/accepted-value.ts'
import { chargeToMass, momentumPerCharge, orbitRadiusMetres } from '#app/physics/charge-to-mass.ts'
import { centreFieldTesla } from '#app/physics/coil-field.ts'
import { speedOfLight } from '#app/physics/constants.ts'
import { expectNear } from '#tests/support/near.ts'
import motion from './data/motion.json'
import radii from './data/orbit-radius.json'

const accepted = acceptedChargeToMass.value
const c = speedOfLight.value

function idealPair(turns: number, radiusMetres: number) {
  const coil = { turns, radiusMetres }
  return { coils: [coil, coil] as [typeof coil, typeof coil], separationMetres: radiusMetres }
}

describe('charge-to-mass quotient and radius', () => {
  const { data, expected, tolerance } = radii.radius_table
  it.each(expected)('have the relativistic radius at $V_V V, $B_T T (textbook mechanics)', (row) => {
    const setting = { voltageVolts: row.V_V, fieldTesla: row.B_T, chargeToMass: data.e_over_m }
    const radius = orbitRadiusMetres(setting)
    expectNear(radius, row.r_rel_m, tolerance)
    expectNear(radius / row.r_nonrel_m - 1, row.rel_difference, { abs: 1e-12 })
    // γ and speed follow from the momentum: p/mc = (e/m)(p/e)/c.
    const reduced = (data.e_over_m * momentumPerCharge(setting)) / c
    const gamma = Math.hypot(1, reduced)
    expectNear(gamma, row.gamma, tolerance)
    expectNear((c * reduced) / gamma, row.speed_rel_m_s, tolerance)
    expectNear((2 * Math.PI * radius * gamma) / (c * reduced), row.cyclotron_period_s, tolerance)
  })

  const inversion = motion.em_inversion
  it.each(inversion.expected)('invert $V_V V, $I_A A, $r_m m exactly', (row) => {
    const field = centreFieldTesla(idealPair(inversion.data.N, inversion.data.R_m), row.I_A)
    expectNear(field, row.B_T, inversion.tolerance)
    const observed = { voltageVolts: row.V_V, fieldTesla: field, radiusMetres: row.r_m }
    const value = chargeToMass(observed)
    expectNear(value, row.em_rel, inversion.tolerance)
    expectNear(value / row.em_nonrel - 1, row.rel_correction, { abs: 1e-12 })
    expectNear(value / accepted - 1, row.deviation_from_codata2022, { abs: 1e-12 })
    expectNear(orbitRadiusMetres({ ...observed, chargeToMass: value }), row.r_m, { rel: 1e-13 })
  })

  it('are inverse to each other for any constant', () => {
    const log = (min: number, max: number) =>
      fc.double({ min: Math.log(min), max: Math.log(max), noNaN: true }).map(Math.exp)
    fc.assert(
      fc.property(log(1, 1e5), log(1e-5, 1), log(1e8, 1e13), (voltageVolts, fieldTesla, quotient) => {
        const radiusMetres = orbitRadiusMetres({ voltageVolts, fieldTesla, chargeToMass: quotient })
        // Near the speed of light the quotient is the small difference of B²r² and V²/c².
        const difference = (2 * c * c) / (voltageVolts * quotient)
        const rel = 1e-14 * (1 + 1 / difference)
        expectNear(chargeToMass({ voltageVolts, fieldTesla, radiusMetres }), quotient, { rel: 4 * rel })
      }),
    )
  })

  it('see a stray field along the axis as the published bias', () => {
    const { data: bench, expected: rows, tolerance: allowed } = motion.earth_field_bias
    for (const row of rows) {
      const coilField = centreFieldTesla(idealPair(bench.N, bench.R_m), row.I_A)
      const radiusMetres = orbitRadiusMetres({
        voltageVolts: bench.V,
        fieldTesla: coilField + row.B_earth_parallel_T,
        chargeToMass: accepted,
      })
      expectNear(radiusMetres, row.r_m, allowed)
      const ignored = chargeToMass({ voltageVolts: bench.V, fieldTesla: coilField, radiusMetres })
      expectNear(ignored, row.em_if_ignored, allowed)
      expectNear(ignored / accepted - 1, row.rel_bias, allowed)
    }
  })

  it('refuse V/c ≥ Br, where no mass fits, and take what lies just inside', () => {
    const { V, threshold_Br_T_m: limit } = motion.inversion_limits.expected
    const at = (factor: number) => () =>
      chargeToMass({ voltageVolts: V, fieldTesla: limit * factor, radiusMetres: 1 })
    expect(at(1 - 1e-12)).toThrow(RangeError)
    expect(at(1 - 1e-12)).toThrow(/voltageVolts/)
    expect(at(0.5)).toThrow(/voltageVolts/)
    expect(at(1 + 1e-9)()).toBeGreaterThan(0)
    expectNear(limit, V / c, motion.inversion_limits.tolerance)
  })

  it.each(['voltageVolts', 'fieldTesla', 'radiusMetres'])('refuse a bad %s by name', (name) => {
    const good = { voltageVolts: 200, fieldTesla: 1e-3, radiusMetres: 0.05 }
    for (const bad of [0, -1, Number.NaN, Number.POSITIVE_INFINITY]) {
      expect(() => chargeToMass({ ...good, [name]: bad })).toThrow(RangeError)
      expect(() => chargeToMass({ ...good, [name]: bad })).toThrow(name)
    }
  })

  it.each(['voltageVolts', 'fieldTesla', 'chargeToMass'])('refuse a radius for a bad %s by name', (name) => {
    const good = { voltageVolts: 200, fieldTesla: 1e-3, chargeToMass: accepted }
    for (const bad of [0, -1, Number.NaN, Number.POSITIVE_INFINITY]) {
      expect(() => orbitRadiusMetres({ ...good, [name]: bad })).toThrow(RangeError)
      expect(() => orbitRadiusMetres({ ...good, [name]: bad })).toThrow(name)
    }
  })
})
