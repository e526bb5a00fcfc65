import { requireFinite, requireNotNegative, requirePositive } from './domain.ts'

/** Of annealed copper at 20 °C, per kelvin. Source: International Annealed Copper Standard, IEC 60028. */
export const COPPER_ALPHA_20 = 3.93e-3

/** Celsius temperature, with the sign turned, at which the straight line of copper's resistance is zero. */
export const COPPER_ZERO_RESISTANCE = 1 / COPPER_ALPHA_20 - 20

const ABSOLUTE_ZERO_CELSIUS = -273.15

/**
 * Mean temperature of a copper winding from its resistance: T = (R/R₁)(k + T₁) − k with k = 1/α₂₀ − 20.
 * α₂₀ refers to 20 °C also when the reference was taken at another temperature.
 *
 * @returns degrees Celsius
 * @throws RangeError naming the argument
 */
export function coilTemperatureCelsius(coil: {
  resistanceOhms: number
  referenceOhms: number
  referenceCelsius: number
}): number {
  requirePositive('resistanceOhms', coil.resistanceOhms)
  requirePositive('referenceOhms', coil.referenceOhms)
  requireCelsius('referenceCelsius', coil.referenceCelsius)
  const ratio = coil.resistanceOhms / coil.referenceOhms
  return coil.referenceCelsius + (ratio - 1) * (COPPER_ZERO_RESISTANCE + coil.referenceCelsius)
}

/**
 * Resistance of the winding at a temperature, the inverse of `coilTemperatureCelsius`.
 *
 * @throws RangeError naming the argument
 */
export function coilResistanceOhms(coil: {
  temperatureCelsius: number
  referenceOhms: number
  referenceCelsius: number
}): number {
  requireCelsius('temperatureCelsius', coil.temperatureCelsius)
  requirePositive('referenceOhms', coil.referenceOhms)
  requireCelsius('referenceCelsius', coil.referenceCelsius)
  return (
    (coil.referenceOhms * (COPPER_ZERO_RESISTANCE + coil.temperatureCelsius)) /
    (COPPER_ZERO_RESISTANCE + coil.referenceCelsius)
  )
}

/**
 * Temperature after a time at constant power: a body with one thermal resistance to its surroundings and
 * one time constant. Exact for any duration; with power 0 it is the cooling curve.
 *
 * @returns degrees Celsius
 * @throws RangeError naming the argument
 */
export function advanceCoilTemperature(coil: {
  temperatureCelsius: number
  ambientCelsius: number
  powerWatts: number
  kelvinPerWatt: number
  timeConstantSeconds: number
  durationSeconds: number
}): number {
  requireCelsius('temperatureCelsius', coil.temperatureCelsius)
  requireCelsius('ambientCelsius', coil.ambientCelsius)
  requireNotNegative('powerWatts', coil.powerWatts)
  requirePositive('kelvinPerWatt', coil.kelvinPerWatt)
  requirePositive('timeConstantSeconds', coil.timeConstantSeconds)
  requireNotNegative('durationSeconds', coil.durationSeconds)
  const steady = coil.ambientCelsius + coil.powerWatts * coil.kelvinPerWatt
  return (
    steady + (coil.temperatureCelsius - steady) * Math.exp(-coil.durationSeconds / coil.timeConstantSeconds)
  )
}

/**
 * Where the temperature of a winding is heading at a steady current, and when it gets to a limit. The
 * resistance, and with it I²R, grows with the temperature, which raises the steady temperature and
 * lengthens the time constant.
 *
 * @returns the steady temperature (null when heating outruns cooling, so that there is none) and the
 *   seconds until `limitCelsius` (0 when it is there already, null when it is never reached)
 * @throws RangeError naming the argument
 */
export function predictCoilTemperature(coil: {
  temperatureCelsius: number
  ambientCelsius: number
  currentAmps: number
  referenceOhms: number
  referenceCelsius: number
  kelvinPerWatt: number
  timeConstantSeconds: number
  limitCelsius: number
}): { steadyCelsius: number | null; secondsToLimit: number | null } {
  requireCelsius('temperatureCelsius', coil.temperatureCelsius)
  requireCelsius('ambientCelsius', coil.ambientCelsius)
  requireFinite('currentAmps', coil.currentAmps)
  requirePositive('kelvinPerWatt', coil.kelvinPerWatt)
  requirePositive('timeConstantSeconds', coil.timeConstantSeconds)
  requireCelsius('limitCelsius', coil.limitCelsius)
  const ohmsPerKelvin =
    coilResistanceOhms({ ...coil, temperatureCelsius: coil.ambientCelsius }) /
    (COPPER_ZERO_RESISTANCE + coil.ambientCelsius)
  const perKelvin = coil.kelvinPerWatt * coil.currentAmps ** 2 * ohmsPerKelvin
  // dT/dt·τ = drive − (1 − perKelvin)(T − ambient)
  const drive = perKelvin * (COPPER_ZERO_RESISTANCE + coil.ambientCelsius)
  const restoring = 1 - perKelvin
  const rise = coil.temperatureCelsius - coil.ambientCelsius
  const limitRise = coil.limitCelsius - coil.ambientCelsius
  const steadyCelsius = restoring > 0 ? coil.ambientCelsius + drive / restoring : null
  if (rise >= limitRise) return { steadyCelsius, secondsToLimit: 0 }
  const driveNow = drive - restoring * rise
  const driveAtLimit = drive - restoring * limitRise
  if (driveNow <= 0 || driveAtLimit <= 0) return { steadyCelsius, secondsToLimit: null }
  const secondsToLimit =
    Math.abs(restoring) < 1e-12
      ? (coil.timeConstantSeconds * (limitRise - rise)) / drive
      : (coil.timeConstantSeconds * Math.log(driveNow / driveAtLimit)) / restoring
  return { steadyCelsius, secondsToLimit }
}

function requireCelsius(name: string, value: number): void {
  if (!(value >= ABSOLUTE_ZERO_CELSIUS && value < Number.POSITIVE_INFINITY)) {
    throw new RangeError(`${name} must be a finite temperature above absolute zero, got ${value}`)
  }
}
