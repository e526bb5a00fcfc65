import type { ReadingBench } from '#app/analysis/reading.ts'
import type { Coil, CoilPair } from '#app/physics/coil-field.ts'

export function twins(coil: Coil, separationMetres: number): CoilPair {
  return { coils: [coil, coil], separationMetres }
}

/** Gun at the side, pointing up; figures of common practice. */
export const sideGun: ReadingBench = {
  coilPair: twins({ turns: 130, radiusMetres: 0.15 }, 0.15),
  uTurns: 0.2,
  uRadiusMetres: 0.0008,
  uSeparationMetres: 0.001,
  coilConnection: 'series',
  gun: { xMetres: 0.041, yMetres: 0, direction: { x: 0, y: 1 } },
  scale: {
    kind: 'mirror',
    graduationMetres: 0.001,
    readableFraction: 0.5,
    distanceBehindMetres: 0,
    uDistanceBehindMetres: 0,
    eyeDistanceMetres: 0.6,
  },
  beam: { halfWidthMetres: 0.0004 },
  anodeMeter: { percentOfReading: 0.1, digits: 2, digitSizeVolts: 0.1 },
  coilMeter: { percentOfReading: 0.2, digits: 3, digitSizeAmps: 0.001 },
}

/** Gun below the axis, pointing to the right: the diameter that is read lies across the line to the axis. */
export const bottomGun: ReadingBench = {
  ...sideGun,
  gun: { xMetres: 0, yMetres: -0.055, direction: { x: 1, y: 0 } },
  scale: {
    ...sideGun.scale,
    kind: 'ruler-behind',
    distanceBehindMetres: 0.08,
    uDistanceBehindMetres: 0.003,
  },
}

/** Gun on the axis, thick windings, coils in parallel. */
export const axisGun: ReadingBench = {
  ...sideGun,
  coilPair: twins(
    { turns: 154, radiusMetres: 0.2, windingWidthMetres: 0.03, windingDepthMetres: 0.028 },
    0.2,
  ),
  coilConnection: 'parallel',
  gun: { xMetres: 0, yMetres: 0, direction: { x: 0, y: 1 } },
}
