import { centreFieldTesla } from '#app/physics/coil-field.ts'
import { traceOrbit, type Vector } from '#app/physics/orbit.ts'
import type { BenchScenario } from '../scenario.ts'
import { glowBrightness } from './tube.ts'
import { traceWeakField } from './weak-field.ts'

/** The path of the electrons of full energy, the outer edge of the glow. */
export type Orbit = {
  points: Vector[]
  /** Whether it came round to the gun, where it ends; otherwise it ended at the glass. */
  isClosed: boolean
  /** Left-most and right-most x, between the points; null where the glass is in the way. */
  turningPoints: { leftMetres: number; rightMetres: number } | null
}

export type Picture = { points: [number, number][]; brightness: number; widthMillimetres: number }

const leastVolts = 5
const leastAmps = 1e-6
/** The body of the gun reaches this far behind its opening; electrons that come round end there. */
const gunBodyMetres = 0.008
/** Weaker than this, the field bends the path so little that the tracing, whose step is a part of a turn, is too coarse. */
const leastTurns = 0.25
const leastBrightness = 0.02
const mostPicturePoints = 200
/** A picture is drawn anew once the orbit's size has changed by more than this part of it. */
const pictureTolerance = 5e-4
const exactTolerance = 1e-9

/** The beam of one bench, traced again only when voltage or current has moved. */
export class Beam {
  readonly #scenario: BenchScenario
  #traced: { volts: number; amps: number; orbit: Orbit } | null = null

  constructor(scenario: BenchScenario) {
    this.#scenario = scenario
  }

  /** The orbit at exactly these values; null where there is no beam to speak of. */
  orbit(volts: number, amps: number): Orbit | null {
    return volts < leastVolts ? null : this.#orbitWithin(exactTolerance, volts, amps)
  }

  /** The centre line of the glow as the eye sees it against the scale, in millimetres to 0.2 mm. */
  picture(volts: number, coilAmps: number, anodeAmps: number): Picture {
    const { glowWidthMetres, scale } = this.#scenario
    const magnification = scale.eyeDistanceMetres / (scale.eyeDistanceMetres - scale.distanceBehindMetres)
    const widthMillimetres = Math.round(glowWidthMetres * magnification * 1e5) / 100
    const brightness = Math.round(glowBrightness(volts, anodeAmps) * 1000) / 1000
    if (brightness < leastBrightness) return { points: [], brightness: 0, widthMillimetres }
    const orbit = this.#orbitWithin(pictureTolerance, volts, coilAmps)
    const line = inward(orbit.points, glowWidthMetres / 2)
    const every = Math.ceil(line.length / mostPicturePoints)
    const points = line
      .filter((_, index) => index % every === 0 || index === line.length - 1)
      .map(([x, y]): [number, number] => [toFifth(x * magnification), toFifth(y * magnification)])
    const first = points[0]
    if (orbit.isClosed && first) points.push([first[0], first[1]])
    return { points, brightness, widthMillimetres }
  }

  #orbitWithin(tolerance: number, volts: number, amps: number): Orbit {
    const last = this.#traced
    if (last) {
      const change = Math.abs(volts / last.volts - 1) / 2 + Math.abs(amps - last.amps) / Math.abs(amps || 1)
      if (change <= tolerance) return last.orbit
    }
    const orbit = traceBench(this.#scenario, volts, amps)
    this.#traced = { volts, amps, orbit }
    return orbit
  }
}

function traceBench(scenario: BenchScenario, volts: number, amps: number): Orbit {
  const currentAmps = Math.abs(amps) < leastAmps ? leastAmps : amps
  const turns = tracedTurns(scenario, volts, currentAmps)
  const path = {
    pair: scenario.coilPair,
    currentAmps,
    voltageVolts: volts,
    chargeToMass: scenario.chargeToMass,
    start: { x: scenario.gun.x, y: scenario.gun.y, z: 0 },
    direction: { ...scenario.gun.direction, z: 0 },
    strayFieldTesla: scenario.strayFieldTesla,
  }
  const points =
    turns < leastTurns
      ? traceWeakField({ ...path, lengthMetres: 2 * scenario.bulbRadiusMetres })
      : traceOrbit({ ...path, turns })
  const atGlass = points.findIndex(({ x, y, z }) => Math.hypot(x, y, z) >= scenario.bulbRadiusMetres)
  const round = atGun(points)
  if (atGlass !== -1 && (round === -1 || atGlass < round)) {
    return { points: points.slice(0, atGlass + 1), isClosed: false, turningPoints: null }
  }
  const orbit = round === -1 ? points : points.slice(0, round)
  return {
    points: orbit,
    isClosed: round !== -1,
    turningPoints: {
      leftMetres: -highest(orbit, ({ x }) => -x),
      rightMetres: highest(orbit, ({ x }) => x),
    },
  }
}

/** Turns of the central coil field that cover one turn in the true field, or the way across the bulb if that is less. */
function tracedTurns(scenario: BenchScenario, volts: number, amps: number): number {
  const coilField = centreFieldTesla(scenario.coilPair, amps)
  const total = Math.abs(coilField + scenario.strayFieldTesla.z)
  const oneTurn = total === 0 ? Number.POSITIVE_INFINITY : (1.15 * Math.abs(coilField)) / total
  const radius = Math.sqrt((2 * volts) / scenario.chargeToMass) / Math.abs(coilField)
  const acrossBulb = (8 * scenario.bulbRadiusMetres) / (2 * Math.PI * radius)
  return Math.min(oneTurn, acrossBulb)
}

/** Index of the point where the path has come round to the gun or past it, turned by 360°; -1 when it has not. */
function atGun(points: Vector[]): number {
  const gun = points[0] as Vector
  let turned = 0
  for (let index = 2; index < points.length; index++) {
    const before = points[index - 2] as Vector
    const here = points[index - 1] as Vector
    const after = points[index] as Vector
    const ax = here.x - before.x
    const ay = here.y - before.y
    const bx = after.x - here.x
    const by = after.y - here.y
    turned += Math.atan2(ax * by - ay * bx, ax * bx + ay * by)
    const isBack = Math.hypot(after.x - gun.x, after.y - gun.y) < gunBodyMetres
    if (Math.abs(turned) >= (isBack ? 1.5 : 2) * Math.PI) return index
  }
  return -1
}

/** Largest value along the path, by a parabola through the three points about the largest one. */
function highest(points: Vector[], of: (point: Vector) => number): number {
  let best = 0
  for (let index = 1; index < points.length; index++) {
    if (of(points[index] as Vector) > of(points[best] as Vector)) best = index
  }
  const before = points[best - 1]
  const here = of(points[best] as Vector)
  const after = points[best + 1]
  if (!before || !after) return here
  const slope = (of(after) - of(before)) / 2
  const curvature = of(after) - 2 * here + of(before)
  return curvature === 0 ? here : here - slope ** 2 / (2 * curvature)
}

/** The path moved towards the side it turns to. */
function inward(points: Vector[], distance: number): [number, number][] {
  const side = Math.sign(turnOf(points)) * distance
  return points.map((point, index) => {
    const from = points[Math.max(0, index - 1)] as Vector
    const to = points[Math.min(points.length - 1, index + 1)] as Vector
    const length = Math.hypot(to.x - from.x, to.y - from.y) || 1
    return [point.x - (side * (to.y - from.y)) / length, point.y + (side * (to.x - from.x)) / length]
  })
}

function turnOf(points: Vector[]): number {
  const first = points[0]
  const second = points[1]
  const last = points[Math.min(points.length - 1, 10)]
  if (!first || !second || !last) return 0
  return (second.x - first.x) * (last.y - second.y) - (second.y - first.y) * (last.x - second.x)
}

function toFifth(metres: number): number {
  return Math.round(metres * 5000) / 5
}
