import { momentumPerCharge } from './charge-to-mass.ts'
import type { CoilPair } from './coil-field.ts'
import { centreFieldTesla, fieldTesla, vectorPotentialTeslaMetres } from './coil-field.ts'
import { requireFinite, requireNotNegative, requirePositive } from './domain.ts'
import { gaussLegendre } from './gauss-legendre.ts'

export type Vector = { x: number; y: number; z: number }

const POINTS_PER_TURN = 720
/** Below this ratio the difference of two fluxes loses digits and the mean over the ring takes its place. */
const NARROW_RING = 1e-3

/**
 * Factor by which e/m worked out from the centre field is to be multiplied because the field falls off
 * towards the coils: (B₀/B)², B being the uniform field that would give an orbit of the same size.
 *
 * The canonical angular momentum p_φρ − eρA_φ has the same value where the orbit is nearest to the axis
 * and where it is farthest. With the orbit's centre at c and its radius r that gives
 * B·r = [ρA]/2c between ρ = |c − r| and c + r, whether or not the axis lies inside the orbit; for c → 0 it
 * is the field at r. The radius is half the distance between those two points.
 *
 * @param radiusMetres radius of the orbit
 * @param centre distance of its centre from the coil axis and from the mid-plane, both 0 by default
 * @throws RangeError naming the argument, also when the orbit reaches where the field turns round
 */
export function evennessFactor(
  pair: CoilPair,
  radiusMetres: number,
  centre: { centreRadialMetres?: number; centreAxialMetres?: number } = {},
): number {
  const { centreRadialMetres = 0, centreAxialMetres = 0 } = centre
  requirePositive('radiusMetres', radiusMetres)
  requireNotNegative('centreRadialMetres', centreRadialMetres)
  requireFinite('centreAxialMetres', centreAxialMetres)
  const farthest = fieldTesla(pair, 1, radiusMetres + centreRadialMetres, centreAxialMetres).axial
  const effective = ringMeanField(pair, radiusMetres, centreRadialMetres, centreAxialMetres)
  if (!(farthest > 0 && effective > 0)) {
    throw new RangeError(
      `radiusMetres must keep the orbit inside the coils, got ${radiusMetres} about a centre ${centreRadialMetres} from the axis`,
    )
  }
  const ratio = centreFieldTesla(pair, 1) / effective
  return ratio * ratio
}

/** ∫ρB dρ over the ring between nearest and farthest point, divided by 2cr; unit current. */
function ringMeanField(pair: CoilPair, radius: number, centre: number, z: number): number {
  const wide = Math.max(radius, centre)
  const narrow = Math.min(radius, centre)
  if (narrow === 0) return fieldTesla(pair, 1, wide, z).axial
  if (narrow < NARROW_RING * wide) {
    const { nodes, weights } = gaussLegendre(3)
    let mean = 0
    for (let i = 0; i < nodes.length; i++) {
      const rho = wide + narrow * (nodes[i] as number)
      mean += ((weights[i] as number) / 2) * rho * fieldTesla(pair, 1, rho, z).axial
    }
    return mean / wide
  }
  const outer = wide + narrow
  const inner = wide - narrow
  const flux =
    outer * vectorPotentialTeslaMetres(pair, 1, outer, z) -
    inner * vectorPotentialTeslaMetres(pair, 1, inner, z)
  return flux / (2 * wide * narrow)
}

/**
 * Path of an electron through the field of the pair, with the relativistic momentum for the voltage. In a
 * static magnetic field the speed is constant, so the path is followed along its length, by the modified
 * midpoint rule extrapolated to sixth order, 720 points to a turn of the central field.
 *
 * @param options.currentAmps current through each coil; positive gives a positive axial field, in which
 *   the electron circles counter-clockwise seen from +z
 * @param options.direction need not have unit length
 * @param options.strayFieldTesla uniform field added to that of the coils
 * @param options.turns length of the path in periods of the central coil field, default 1
 * @returns points in metres at equal distances along the path, the start first; z along the coil axis
 * @throws RangeError naming the argument; a path that meets a turn of the winding exactly is refused too.
 *   Accuracy is not guaranteed within a few millimetres of a winding.
 */
export function traceOrbit(options: {
  pair: CoilPair
  currentAmps: number
  voltageVolts: number
  chargeToMass: number
  start: Vector
  direction: Vector
  strayFieldTesla?: Vector
  turns?: number
}): Vector[] {
  const { pair, currentAmps, start, direction, strayFieldTesla = { x: 0, y: 0, z: 0 }, turns = 1 } = options
  requireFinite('currentAmps', currentAmps)
  if (currentAmps === 0) throw new RangeError('currentAmps must not be 0: without a field there is no orbit')
  requirePositive('turns', turns)
  requireVector('start', start)
  requireVector('direction', direction)
  requireVector('strayFieldTesla', strayFieldTesla)
  const length = Math.hypot(direction.x, direction.y, direction.z)
  if (!(length > 0)) throw new RangeError('direction must not have zero length')
  const momentum = momentumPerCharge(options)
  const turnMetres = (2 * Math.PI * momentum) / Math.abs(centreFieldTesla(pair, currentAmps))
  const steps = Math.max(1, Math.ceil(POINTS_PER_TURN * turns))
  const stepMetres = (turnMetres * turns) / steps

  const derivative = (state: Float64Array, out: Float64Array): void => {
    const [x, y, z, ux, uy, uz] = state as unknown as State
    const rho = Math.hypot(x, y)
    const field = fieldTesla(pair, currentAmps, rho, z)
    const radialOverRho = rho > 0 ? field.radial / rho : 0
    const bx = radialOverRho * x + strayFieldTesla.x
    const by = radialOverRho * y + strayFieldTesla.y
    const bz = field.axial + strayFieldTesla.z
    out[0] = ux
    out[1] = uy
    out[2] = uz
    // The charge is negative: du/ds = −(e/p) u × B.
    out[3] = (uz * by - uy * bz) / momentum
    out[4] = (ux * bz - uz * bx) / momentum
    out[5] = (uy * bx - ux * by) / momentum
  }

  const state = Float64Array.of(
    start.x,
    start.y,
    start.z,
    direction.x / length,
    direction.y / length,
    direction.z / length,
  )
  const points: Vector[] = [{ x: start.x, y: start.y, z: start.z }]
  const step = extrapolatedStepper(derivative)
  for (let i = 0; i < steps; i++) {
    step(state, stepMetres)
    const [x, y, z, ux, uy, uz] = state as unknown as State
    const unit = Math.hypot(ux, uy, uz)
    state[3] = ux / unit
    state[4] = uy / unit
    state[5] = uz / unit
    points.push({ x, y, z })
  }
  return points
}

type State = [number, number, number, number, number, number]

/** Weights of the results with 2, 4 and 6 substeps that cancel the errors in h² and h⁴. */
const EXTRAPOLATION = [
  { substeps: 2, weight: 1 / 24 },
  { substeps: 4, weight: -16 / 15 },
  { substeps: 6, weight: 81 / 40 },
]

function extrapolatedStepper(derivative: (state: Float64Array, out: Float64Array) => void) {
  const slopeAtStart = new Float64Array(6)
  const slope = new Float64Array(6)
  const previous = new Float64Array(6)
  const current = new Float64Array(6)
  const result = new Float64Array(6)
  return (state: Float64Array, length: number): void => {
    derivative(state, slopeAtStart)
    result.fill(0)
    for (const { substeps, weight } of EXTRAPOLATION) {
      const h = length / substeps
      for (let i = 0; i < 6; i++) {
        previous[i] = state[i] as number
        current[i] = (state[i] as number) + h * (slopeAtStart[i] as number)
      }
      for (let n = 1; n < substeps; n++) {
        derivative(current, slope)
        for (let i = 0; i < 6; i++) {
          const next = (previous[i] as number) + 2 * h * (slope[i] as number)
          previous[i] = current[i] as number
          current[i] = next
        }
      }
      for (let i = 0; i < 6; i++) result[i] = (result[i] as number) + weight * (current[i] as number)
    }
    state.set(result)
  }
}

function requireVector(name: string, vector: Vector): void {
  requireFinite(`${name}.x`, vector.x)
  requireFinite(`${name}.y`, vector.y)
  requireFinite(`${name}.z`, vector.z)
}
