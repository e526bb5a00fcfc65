import type { ReadingBench } from '#app/analysis/reading.ts'
import type { Vector } from '#app/physics/orbit.ts'
import { traceOrbit } from '#app/physics/orbit.ts'

/**
 * The outermost points along x of the orbit that leaves the gun, traced in the full field and ended short
 * of a full turn, where the beam comes back to the gun. In metres on the beam itself, without parallax.
 */
export function orbitEdges(setting: {
  bench: ReadingBench
  voltageVolts: number
  currentPerCoilAmps: number
  chargeToMass: number
}): { left: number; right: number } {
  const { bench, voltageVolts, chargeToMass } = setting
  const { xMetres: x, yMetres: y, direction } = bench.gun
  const points = traceOrbit({
    pair: bench.coilPair,
    currentAmps: setting.currentPerCoilAmps,
    voltageVolts,
    chargeToMass,
    start: { x, y, z: 0 },
    direction: { ...direction, z: 0 },
    turns: 0.97,
  })
  return { left: -greatest(points, -1), right: greatest(points, 1) }
}

/** Greatest ±x, by a parabola through the highest point and its neighbours. */
function greatest(points: Vector[], sign: 1 | -1): number {
  const at = (i: number): number => sign * (points[i] as Vector).x
  let best = 0
  for (let i = 1; i < points.length; i++) if (at(i) > at(best)) best = i
  if (best === 0 || best === points.length - 1) return at(best)
  const slope = (at(best + 1) - at(best - 1)) / 2
  const bend = at(best + 1) - 2 * at(best) + at(best - 1)
  return at(best) - slope ** 2 / (2 * bend)
}
