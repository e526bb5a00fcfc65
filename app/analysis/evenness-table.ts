import type { Coil, CoilPair } from '#app/physics/coil-field.ts'
import { centreFieldTesla, fieldTesla, requireCoilPair } from '#app/physics/coil-field.ts'
import { requireFinite, requirePositive } from '#app/statistics/domain.ts'
import { ChebyshevSeries } from './chebyshev.ts'

/** The gun's opening in the mid-plane of the coil pair and the way it points; any length will do. */
export type Gun = { xMetres: number; yMetres: number; direction: { x: number; y: number } }

/**
 * How the field along the orbit compares with that at the centre, for one coil pair and gun. All slopes
 * take both coils to change alike.
 */
export type EvennessTable = {
  /** k: centre field an ampere through each coil, always positive */
  teslaPerAmp: number
  slopes: { perTurn: number; perRadiusMetre: number; perSeparationMetre: number }
  /** Beyond this radius the orbit comes too close to the coils. */
  largestRadiusMetres: number
  /** g, the mean field that the orbit of this radius sees over the centre field */
  g: ChebyshevSeries
  gPerRadiusMetre: ChebyshevSeries
  gPerSeparationMetre: ChebyshevSeries
}

type TabulatedBench =
  | { coilPair: CoilPair; gun: Gun }
  | { coilPair: null; fieldFactor: { teslaPerAmp: number } }

const PROFILE_TERMS = 32
const RADIUS_TERMS = 28
const STEPS_PER_TURN = 192
/** Part of the windings' inner radius up to which an orbit may reach. */
const REACH = 0.85
const GEOMETRY_STEP = 2e-4
/** Up to which an orbit is taken to see the even field of a factor alone. */
const EVEN_RADIUS_METRES = 10
/** An edge this short of a full turn is the gun itself, where the beam ends. */
const FULL_TURN_MARGIN = 0.005

/**
 * Works out g for every orbit of a bench: B·r = p/e with B = k·I·g(r), where r is half the distance along
 * x between the outermost points of the orbit that leaves the gun. The path is integrated over its
 * heading in the exact mid-plane field, so it holds off the axis and whichever way the gun points; the
 * shape of the path depends on p/eB alone, hence g on r alone. Some tens of milliseconds; do it once for a
 * bench. Of a field of which only its factor is known the table is even: g = 1 for every orbit.
 *
 * @param sense of the coil current; the electrons circle the other way when it is reversed
 * @throws RangeError naming the argument, also for a gun that lies outside the coils
 */
export function tabulateEvenness(bench: TabulatedBench, sense: 1 | -1 = 1): EvennessTable {
  if (bench.coilPair === null) return evenField(bench.fieldFactor.teslaPerAmp)
  const { coilPair: pair, gun } = bench
  requireCoilPair(pair)
  requireFinite('gun.xMetres', gun.xMetres)
  requireFinite('gun.yMetres', gun.yMetres)
  const length = Math.hypot(gun.direction.x, gun.direction.y)
  if (!(length > 0 && length < Number.POSITIVE_INFINITY)) {
    throw new RangeError('gun.direction must be finite and not of zero length')
  }
  const inner = Math.min(...pair.coils.map((coil) => coil.radiusMetres - (coil.windingDepthMetres ?? 0) / 2))
  const reach = REACH * inner
  if (!(Math.hypot(gun.xMetres, gun.yMetres) < reach)) {
    throw new RangeError(`gun.xMetres and gun.yMetres must lie within ${reach} m of the coil axis`)
  }
  // Reversed current is the mirror image of the same orbit in the x axis.
  const start: Start = {
    x: gun.xMetres,
    y: sense * gun.yMetres,
    heading: Math.atan2(sense * gun.direction.y, gun.direction.x),
  }
  const orbit = (of: CoilPair) => orbitSize(profileOf(of, reach * (1 + 2 * GEOMETRY_STEP)), start, reach)
  const size = orbit(pair)
  const largest = largestOrbit(size, reach)
  const radiusStep = GEOMETRY_STEP * inner
  const separationStep = GEOMETRY_STEP * pair.separationMetres
  const wider = orbit(withRadius(pair, radiusStep))
  const narrower = orbit(withRadius(pair, -radiusStep))
  const further = orbit({ ...pair, separationMetres: pair.separationMetres + separationStep })
  const closer = orbit({ ...pair, separationMetres: pair.separationMetres - separationStep })

  const values: number[] = []
  const perRadius: number[] = []
  const perSeparation: number[] = []
  for (const radius of ChebyshevSeries.nodes(0, largest.radius, RADIUS_TERMS)) {
    const uniform = solveUniformRadius(size, radius, largest)
    const h = 1e-4 * uniform
    const growth = (size(uniform + h) - size(uniform - h)) / (2 * h)
    values.push(uniform / radius)
    // At a fixed radius the uniform radius makes up for what the geometry does to the size.
    perRadius.push(-(wider(uniform) - narrower(uniform)) / (2 * radiusStep) / growth / radius)
    perSeparation.push(-(further(uniform) - closer(uniform)) / (2 * separationStep) / growth / radius)
  }
  const series = (list: number[]) => ChebyshevSeries.through(0, largest.radius, list)
  return {
    teslaPerAmp: centreFieldTesla(pair, 1),
    slopes: fieldSlopes(pair),
    largestRadiusMetres: largest.radius,
    g: series(values),
    gPerRadiusMetre: series(perRadius),
    gPerSeparationMetre: series(perSeparation),
  }
}

function evenField(teslaPerAmp: number): EvennessTable {
  requirePositive('fieldFactor.teslaPerAmp', teslaPerAmp)
  const constant = (value: number) => ChebyshevSeries.through(0, EVEN_RADIUS_METRES, [value])
  return {
    teslaPerAmp,
    slopes: { perTurn: 0, perRadiusMetre: 0, perSeparationMetre: 0 },
    largestRadiusMetres: EVEN_RADIUS_METRES,
    g: constant(1),
    gPerRadiusMetre: constant(0),
    gPerSeparationMetre: constant(0),
  }
}

type Start = { x: number; y: number; heading: number }
type Profile = (rhoSquared: number) => number

/** Mid-plane axial field over the centre field, as a series in ρ². */
function profileOf(pair: CoilPair, reach: number): Profile {
  const centre = centreFieldTesla(pair, 1)
  const nodes = ChebyshevSeries.nodes(0, reach * reach, PROFILE_TERMS)
  const values = nodes.map((square) => fieldTesla(pair, 1, Math.sqrt(square), 0).axial / centre)
  const series = ChebyshevSeries.through(0, reach * reach, values)
  return (rhoSquared) => series.value(rhoSquared)
}

/**
 * Half the extent along x of the orbit that in a uniform field would have the given radius; NaN where the
 * orbit passes `reach`.
 */
function orbitSize(profile: Profile, start: Start, reach: number): (uniformRadius: number) => number {
  const firstEdge = Math.PI / 2 + Math.PI * Math.ceil((start.heading - Math.PI / 2) / Math.PI + 1e-12)
  const end = start.heading + 2 * Math.PI
  const stops = [firstEdge, firstEdge + Math.PI].filter((heading) => heading < end - FULL_TURN_MARGIN)
  // The rest of the turn has no edge but shows how far out the orbit comes.
  stops.push(end)
  const limit = reach * reach
  return (uniformRadius) => {
    let { x, y, heading } = start
    let left = x
    let right = x
    for (const stop of stops) {
      const steps = Math.max(1, Math.ceil(((stop - heading) / (2 * Math.PI)) * STEPS_PER_TURN))
      const h = (stop - heading) / steps
      for (let i = 0; i < steps; i++) {
        ;[x, y] = headingStep(profile, uniformRadius, x, y, heading + i * h, h)
        if (!(x * x + y * y < limit)) return Number.NaN
      }
      heading = stop
      if (stop !== end) {
        left = Math.min(left, x)
        right = Math.max(right, x)
      }
    }
    return (right - left) / 2
  }
}

/** One Runge-Kutta step of dx/dθ = λ cos θ/b, dy/dθ = λ sin θ/b. */
function headingStep(
  profile: Profile,
  lambda: number,
  x: number,
  y: number,
  heading: number,
  h: number,
): [number, number] {
  const cosines = [Math.cos(heading), Math.cos(heading + h / 2), Math.cos(heading + h)] as const
  const sines = [Math.sin(heading), Math.sin(heading + h / 2), Math.sin(heading + h)] as const
  const bend = (dx: number, dy: number): number => lambda / profile((x + dx) ** 2 + (y + dy) ** 2)
  const k1 = bend(0, 0)
  const k2 = bend((h / 2) * k1 * cosines[0], (h / 2) * k1 * sines[0])
  const k3 = bend((h / 2) * k2 * cosines[1], (h / 2) * k2 * sines[1])
  const k4 = bend(h * k3 * cosines[1], h * k3 * sines[1])
  const middle = 2 * (k2 + k3)
  return [
    x + (h / 6) * (k1 * cosines[0] + middle * cosines[1] + k4 * cosines[2]),
    y + (h / 6) * (k1 * sines[0] + middle * sines[1] + k4 * sines[2]),
  ]
}

function largestOrbit(size: (uniform: number) => number, reach: number): { uniform: number; radius: number } {
  let low = 0
  let high = 2 * reach
  for (let i = 0; i < 50; i++) {
    const middle = (low + high) / 2
    if (Number.isFinite(size(middle))) low = middle
    else high = middle
  }
  // The slopes need room for a step outwards.
  const uniform = low * (1 - 3e-3)
  return { uniform, radius: size(uniform) }
}

/** The uniform-field radius of the orbit with the given size, by the Illinois form of false position. */
function solveUniformRadius(
  size: (uniform: number) => number,
  radius: number,
  largest: { uniform: number; radius: number },
): number {
  let [low, below] = [0, -radius]
  let [high, above] = [largest.uniform, largest.radius - radius]
  let side = 0
  for (let i = 0; i < 100; i++) {
    const guess = (low * above - high * below) / (above - below)
    const excess = size(guess) - radius
    if (Math.abs(excess) <= 1e-14 * radius || guess === low || guess === high) return guess
    if (excess > 0) {
      ;[high, above] = [guess, excess]
      if (side === 1) below /= 2
      side = 1
    } else {
      ;[low, below] = [guess, excess]
      if (side === -1) above /= 2
      side = -1
    }
  }
  return (low + high) / 2
}

function withRadius(pair: CoilPair, change: number): CoilPair {
  const changed = (coil: Coil): Coil => ({ ...coil, radiusMetres: coil.radiusMetres + change })
  return { ...pair, coils: [changed(pair.coils[0]), changed(pair.coils[1])] }
}

function fieldSlopes(pair: CoilPair): EvennessTable['slopes'] {
  const slope = (change: (by: number) => CoilPair, h: number): number => {
    const at = (steps: number): number => centreFieldTesla(change(steps * h), 1)
    return (8 * (at(1) - at(-1)) - (at(2) - at(-2))) / (12 * h)
  }
  const more = (coil: Coil, by: number): Coil => ({ ...coil, turns: coil.turns + by })
  const [first, second] = pair.coils
  return {
    // Exact: the field is linear in the turns.
    perTurn:
      2 *
      (centreFieldTesla({ ...pair, coils: [more(first, 0.5), more(second, 0.5)] }, 1) -
        centreFieldTesla(pair, 1)),
    perRadiusMetre: slope((by) => withRadius(pair, by), GEOMETRY_STEP * first.radiusMetres),
    perSeparationMetre: slope(
      (by) => ({ ...pair, separationMetres: pair.separationMetres + by }),
      GEOMETRY_STEP * pair.separationMetres,
    ),
  }
}
