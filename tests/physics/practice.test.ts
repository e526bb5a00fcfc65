import { describe, expect, it } from 'vitest'
import { acceptedChargeToMass } from '#app/physics/accepted-value.ts'
import { chargeToMass, orbitRadiusMetres } from '#app/physics/charge-to-mass.ts'
import { type CoilPair, centreFieldTesla } from '#app/physics/coil-field.ts'
import { coilResistanceOhms } from '#app/physics/coil-heating.ts'
import { expectNear } from '#tests/support/near.ts'
import practice from './data/practice.json'

const eta = acceptedChargeToMass.value

function pairOf(turns: number, radiusMetres: number): CoilPair {
  const coil = { turns, radiusMetres }
  return { coils: [coil, coil], separationMetres: radiusMetres }
}

describe('typical benches (common practice)', () => {
  const { expected } = practice.typical_values
  const middle = ([low = 0, high = 0]: number[]) => (low + high) / 2
  const cases = expected.typical_turns.flatMap((turns) =>
    expected.coil_radius_m.map((radius) => ({ turns, radius })),
  )

  it.each(cases)('of $turns turns and $radius m have the usual field and beam', ({ turns, radius }) => {
    const field = centreFieldTesla(pairOf(turns, radius), middle(expected.coil_current_A))
    const beam = orbitRadiusMetres({
      voltageVolts: middle(expected.accelerating_V_dc),
      fieldTesla: field,
      chargeToMass: eta,
    })
    const [leastField = 0, mostField = 0] = expected.field_mT
    const [leastBeam = 0, mostBeam = 0] = expected.beam_radius_m
    expect(1000 * field).toBeGreaterThan(leastField)
    expect(1000 * field).toBeLessThan(mostField)
    expect(beam).toBeGreaterThan(leastBeam)
    expect(beam).toBeLessThan(mostBeam)
  })
})

describe('straight lines of the textbook (slow electrons)', () => {
  // At some hundredths of a volt relativity adds less than 10⁻⁷.
  const radius = (voltageVolts: number, fieldTesla: number) =>
    orbitRadiusMetres({ voltageVolts, fieldTesla, chargeToMass: eta })
  const field = (amps: number) => 7e-6 * amps
  const allowed = { rel: 1e-6 }

  it('of V against (Br)² have the slope η/2 and the voltage offset as intercept', () => {
    const offset = 0.004
    const points = [0.01, 0.03].map((volts) => {
      const x = (field(1.5) * radius(volts - offset, field(1.5))) ** 2
      return { x, y: volts }
    })
    const [first, second] = points as [{ x: number; y: number }, { x: number; y: number }]
    const slope = (second.y - first.y) / (second.x - first.x)
    expectNear(slope, eta / 2, allowed)
    expectNear(first.y - slope * first.x, offset, allowed)
  })

  it('of r² against V at a fixed current have the slope 2/ηB²', () => {
    const slope = (radius(0.03, field(1.5)) ** 2 - radius(0.01, field(1.5)) ** 2) / 0.02
    expectNear(slope, 2 / (eta * field(1.5) ** 2), allowed)
  })

  it('of 1/r against I at a fixed voltage have the slope k√(η/2V), and the stray field in their intercept', () => {
    const stray = 2e-6
    const inverse = (amps: number) => 1 / radius(0.02, field(amps) + stray)
    const slope = inverse(2) - inverse(1)
    const root = Math.sqrt(eta / 0.04)
    expectNear(slope, field(1) * root, allowed)
    expectNear(inverse(1) - slope, stray * root, allowed)
  })
})

describe('known systematic effects', () => {
  const setting = { voltageVolts: 250, fieldTesla: 1.2e-3, chargeToMass: eta }

  it('a stray field along the axis goes out of the mean of 1/r over both senses of the current', () => {
    const inverse = (stray: number) =>
      1 / orbitRadiusMetres({ ...setting, fieldTesla: setting.fieldTesla + stray })
    expectNear((inverse(4e-5) + inverse(-4e-5)) / 2, inverse(0), { rel: 1e-14 })
  })

  it('electrons that lost energy in the gas make e/m come out high', () => {
    const radiusMetres = orbitRadiusMetres({ ...setting, voltageVolts: 240 })
    const { voltageVolts, fieldTesla } = setting
    const value = chargeToMass({ voltageVolts, fieldTesla, radiusMetres })
    // As V/(V − loss), but for the relativistic term of some 10⁻⁴ of the difference.
    expectNear(value / eta, 250 / 240, { rel: 1e-4 })
  })
})

describe('the resistance of copper', () => {
  it('agrees with that of the pure metal to 1 % from 0 to 100 °C (CRC Handbook)', () => {
    const { expected } = practice.crc_copper_resistivity
    for (const [celsius, resistivity] of Object.entries(expected)) {
      const ratio = coilResistanceOhms({
        temperatureCelsius: Number(celsius),
        referenceOhms: 1,
        referenceCelsius: 20,
      })
      expectNear(ratio, resistivity / expected['20'], { rel: 0.01 })
    }
  })
})
