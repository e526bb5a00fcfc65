import { momentumPerCharge } from '#app/physics/charge-to-mass.ts'
import { type CoilPair, fieldTesla } from '#app/physics/coil-field.ts'
import type { Vector } from '#app/physics/orbit.ts'

const steps = 160

/**
 * Path of an electron over a given length in a field so weak that it makes no turn: by second-order steps of equal
 * length along the path, each bent by the field at its middle. The start comes first.
 */
export function traceWeakField(options: {
  pair: CoilPair
  currentAmps: number
  voltageVolts: number
  chargeToMass: number
  start: Vector
  direction: Vector
  strayFieldTesla: Vector
  lengthMetres: number
}): Vector[] {
  const { pair, currentAmps, strayFieldTesla: stray, lengthMetres } = options
  const momentum = momentumPerCharge(options)
  const step = lengthMetres / steps
  const points = [options.start]
  let position = options.start
  let direction = options.direction
  for (let index = 0; index < steps; index++) {
    const middle = along(position, direction, step / 2)
    const rho = Math.hypot(middle.x, middle.y)
    const coil = fieldTesla(pair, currentAmps, rho, middle.z)
    const radialOverRho = rho > 0 ? coil.radial / rho : 0
    const field = {
      x: radialOverRho * middle.x + stray.x,
      y: radialOverRho * middle.y + stray.y,
      z: coil.axial + stray.z,
    }
    const half = along(direction, turning(direction, field, momentum), step / 2)
    const bent = along(direction, turning(half, field, momentum), step)
    const length = Math.hypot(bent.x, bent.y, bent.z)
    const next = { x: bent.x / length, y: bent.y / length, z: bent.z / length }
    position = along(position, along(direction, next, 1), step / 2)
    direction = next
    points.push(position)
  }
  return points
}

function along(from: Vector, by: Vector, factor: number): Vector {
  return { x: from.x + factor * by.x, y: from.y + factor * by.y, z: from.z + factor * by.z }
}

/** Change of direction along the path, −(e/p) u × B: the charge is negative. */
function turning(direction: Vector, field: Vector, momentum: number): Vector {
  return {
    x: (direction.z * field.y - direction.y * field.z) / momentum,
    y: (direction.x * field.z - direction.z * field.x) / momentum,
    z: (direction.y * field.x - direction.x * field.y) / momentum,
  }
}
