import { type CoilPair, fieldTesla } from '#app/physics/coil-field.ts'
import { vacuumPermeability } from '#app/physics/constants.ts'
import { type Figure, measure, requireAgreement } from './measure.ts'
import { integrate } from './quadrature.ts'

const RADIUS = 0.15
const TURNS = 130
const coil = { turns: TURNS, radiusMetres: RADIUS }
const pair: CoilPair = { coils: [coil, coil], separationMetres: RADIUS }
const ACCURACY = 1e-10

/** Both components by the law of Biot and Savart, the sum over both loops under one integral. */
function byQuadrature(current: number, rho: number, z: number): { radial: number; axial: number } {
  const scale = (vacuumPermeability.value * TURNS * current * RADIUS) / (2 * Math.PI)
  const above = z - RADIUS / 2
  const below = z + RADIUS / 2
  const base = RADIUS * RADIUS + rho * rho
  const cubes = (phi: number, height: number): number =>
    (base + height * height - 2 * RADIUS * rho * Math.cos(phi)) ** -1.5
  const axial = (phi: number): number =>
    (RADIUS - rho * Math.cos(phi)) * (cubes(phi, above) + cubes(phi, below))
  const radial = (phi: number): number =>
    Math.cos(phi) * (above * cubes(phi, above) + below * cubes(phi, below))
  return {
    axial: scale * integrate(axial, 0, Math.PI, ACCURACY),
    radial: scale * integrate(radial, 0, Math.PI, ACCURACY),
  }
}

/** Points of a net over the tube, another for each call. */
function pointOf(call: number): [rho: number, z: number] {
  return [0.02 + 0.06 * ((call * 0.618034) % 1), 0.005 + 0.05 * ((call * 0.754878) % 1)]
}

export function fieldFigures(): Figure[] {
  for (let call = 0; call < 100; call++) {
    const [rho, z] = pointOf(call)
    const [ours, theirs] = [fieldTesla(pair, 1.5, rho, z), byQuadrature(1.5, rho, z)]
    requireAgreement('axial field', ours.axial, theirs.axial, ACCURACY)
    requireAgreement('radial field', ours.radial, theirs.radial, 100 * ACCURACY)
  }
  const [ours, theirs] = measure(
    (call) => {
      const { axial, radial } = fieldTesla(pair, 1.5, ...pointOf(call))
      return axial + radial
    },
    (call) => {
      const { axial, radial } = byQuadrature(1.5, ...pointOf(call))
      return axial + radial
    },
  ) as [number, number]
  return [
    {
      name: 'field of a thin pair at one point off the axis',
      seconds: ours,
      goalSeconds: 1e-6,
      library: { name: 'adaptive Gauss-Kronrod quadrature, 1e-10', ratio: theirs / ours, atLeast: 20 },
    },
  ]
}
