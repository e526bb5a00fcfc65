import { chargeToMass } from '#app/physics/charge-to-mass.ts'
import { centreFieldTesla } from '#app/physics/coil-field.ts'
import { speedOfLight, vacuumPermeability } from '#app/physics/constants.ts'
import type { Values } from './quantities.ts'

/** Uniform between 0 and 1. */
export type Random = () => number

/**
 * A setting of a bench that there might be, drawn by chance: every quantity by itself, so that a formula which is right at
 * some is right by its form. The magnetic constant varies too. The radius follows from how fast the electron is, which
 * keeps the relativistic part of e/m, V/(2mc²/e), below 3.3 × 10⁻⁴.
 */
export function drawPoint(random: Random, { isHelmholtz }: { isHelmholtz: boolean }): Values {
  const between = (low: number, high: number) => low + (high - low) * random()
  const coilRadius = between(0.1, 0.25)
  const setting = {
    anodeVoltage: between(80, 320),
    coilCurrent: between(0.7, 3),
    turns: between(70, 210),
    coilRadius,
    coilSeparation: isHelmholtz ? coilRadius : coilRadius * between(0.6, 1.5),
    magneticConstant: vacuumPermeability.value * between(0.6, 1.6),
  }
  const partOfLightSpeed = between(0.011, 0.018)
  const beamRadius = setting.anodeVoltage / (speedOfLight.value * fieldAt(setting) * partOfLightSpeed)
  return { ...setting, beamRadius, beamDiameter: 2 * beamRadius }
}

/** e/m of an electron that would be seen so at the centre of the coil pair, in C/kg. Any value may come out. */
export function chargeToMassAt(point: Values): number {
  return chargeToMass({
    voltageVolts: point.anodeVoltage,
    fieldTesla: fieldAt(point),
    radiusMetres: point.beamRadius,
  })
}

/** The same without relativity, which has a value at any setting. */
export const classicalChargeToMassAt = (point: Values): number =>
  (2 * point.anodeVoltage) / (fieldAt(point) * point.beamRadius) ** 2

type FieldSetting = Pick<
  Values,
  'coilCurrent' | 'turns' | 'coilRadius' | 'coilSeparation' | 'magneticConstant'
>

function fieldAt({ coilCurrent, turns, coilRadius, coilSeparation, magneticConstant }: FieldSetting): number {
  const coil = { turns, radiusMetres: coilRadius }
  const tesla = centreFieldTesla({ coils: [coil, coil], separationMetres: coilSeparation }, coilCurrent)
  return (tesla * magneticConstant) / vacuumPermeability.value
}

/** The quantities that can change by themselves; radius and diameter of the beam go together. */
export const degreesOfFreedom = [
  'anodeVoltage',
  'coilCurrent',
  'beamRadius',
  'turns',
  'coilRadius',
  'coilSeparation',
  'magneticConstant',
] as const
export type Free = (typeof degreesOfFreedom)[number]

/** The same setting with one quantity multiplied. Where the coils are as far apart as their radius they stay so. */
export function scaled(
  point: Values,
  quantity: Free,
  factor: number,
  { isHelmholtz }: { isHelmholtz: boolean },
): Values {
  const changed = { ...point, [quantity]: point[quantity] * factor }
  if (quantity === 'beamRadius') changed.beamDiameter = point.beamDiameter * factor
  if (quantity === 'coilRadius' && isHelmholtz) changed.coilSeparation = point.coilSeparation * factor
  return changed
}
