import type { Vector } from '#app/physics/orbit.ts'
import { traceOrbit } from '#app/physics/orbit.ts'

/**
 * Start of a path and the point where it first runs opposite to the start's +y direction, found by
 * interpolating the traced polyline: the parameter where the path's x is least.
 */
export function turningPoints(options: Parameters<typeof traceOrbit>[0]): { start: Vector; half: Vector } {
  const points = traceOrbit({ ...options, turns: 0.75 })
  let least = 0
  points.forEach((point, i) => {
    if (point.x < (points[least] as Vector).x) least = i
  })
  const around = points.slice(least - 3, least + 4)
  if (around.length < 7) throw new Error('the path does not turn round within three quarters of a turn')
  const xs = around.map((point) => point.x)
  const ys = around.map((point) => point.y)
  const at = minimumOf(xs)
  return { start: points[0] as Vector, half: { x: interpolate(xs, at), y: interpolate(ys, at), z: 0 } }
}

/** Least and greatest distance of a path from the coil axis over a turn and a half. */
export function apsides(options: Parameters<typeof traceOrbit>[0]): { nearest: number; farthest: number } {
  // The square of the distance is smooth also where the path crosses the axis.
  const squares = traceOrbit({ ...options, turns: 1.5 }).map(({ x, y }) => x * x + y * y)
  const inner = squares.slice(3, -3)
  const least = inner.indexOf(Math.min(...inner)) + 3
  const negative = squares.map((value) => -value)
  const greatest = inner.indexOf(Math.max(...inner)) + 3
  const near = squares.slice(least - 3, least + 4)
  const far = negative.slice(greatest - 3, greatest + 4)
  return {
    nearest: Math.sqrt(Math.max(0, interpolate(near, minimumOf(near)))),
    farthest: Math.sqrt(-interpolate(far, minimumOf(far))),
  }
}

/** Lagrange interpolation through values at −3 … 3. */
function interpolate(values: number[], at: number): number {
  return values.reduce((sum, value, i) => {
    let weight = 1
    for (let j = 0; j < values.length; j++) if (j !== i) weight *= (at - (j - 3)) / (i - j)
    return sum + weight * value
  }, 0)
}

function minimumOf(values: number[]): number {
  const slope = (t: number): number => (interpolate(values, t + 1e-3) - interpolate(values, t - 1e-3)) / 2e-3
  let low = -1
  let high = 1
  for (let i = 0; i < 60; i++) {
    const middle = (low + high) / 2
    if (slope(middle) > 0) high = middle
    else low = middle
  }
  return (low + high) / 2
}
