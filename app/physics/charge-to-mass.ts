import { speedOfLight } from './constants.ts'
import { requirePositive } from './domain.ts'

const C = speedOfLight.value

/**
 * Charge-to-mass quotient (magnitude) of an electron accelerated from rest through a voltage and held on a
 * circle by a field at right angles: 2V/(B²r² − V²/c²), exact in special relativity for a static field.
 *
 * @returns coulombs per kilogram
 * @throws RangeError naming the argument; also when V/c ≥ Br, where no particle with mass fits
 *
 * Source: pc = √((eV)² + 2eVmc²) and p = eBr.
 */
export function chargeToMass(observed: {
  voltageVolts: number
  fieldTesla: number
  radiusMetres: number
}): number {
  const { voltageVolts, fieldTesla, radiusMetres } = observed
  requirePositive('voltageVolts', voltageVolts)
  requirePositive('fieldTesla', fieldTesla)
  requirePositive('radiusMetres', radiusMetres)
  const fieldRadius = fieldTesla * radiusMetres
  const lightLimit = voltageVolts / C
  if (!(fieldRadius > lightLimit)) {
    throw new RangeError(
      `voltageVolts must be below c times fieldTesla times radiusMetres (${fieldRadius * C} V), got ${voltageVolts}`,
    )
  }
  return (2 * voltageVolts) / ((fieldRadius - lightLimit) * (fieldRadius + lightLimit))
}

/**
 * Momentum over charge p/e = √(2V/(e/m) + V²/c²), in tesla metres: the product B·r of the circle.
 *
 * @throws RangeError naming the argument
 */
export function momentumPerCharge(electron: { voltageVolts: number; chargeToMass: number }): number {
  requirePositive('voltageVolts', electron.voltageVolts)
  requirePositive('chargeToMass', electron.chargeToMass)
  const lightLimit = electron.voltageVolts / C
  return Math.sqrt((2 * electron.voltageVolts) / electron.chargeToMass + lightLimit * lightLimit)
}

/**
 * Radius of the circle in a uniform field, the inverse of `chargeToMass`.
 *
 * @returns metres
 * @throws RangeError naming the argument
 */
export function orbitRadiusMetres(setting: {
  voltageVolts: number
  fieldTesla: number
  chargeToMass: number
}): number {
  requirePositive('fieldTesla', setting.fieldTesla)
  return momentumPerCharge(setting) / setting.fieldTesla
}
