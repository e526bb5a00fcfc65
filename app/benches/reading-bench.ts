import type { ReadingBench } from '#app/analysis/reading.ts'
import type { BenchConfig } from '#app/protocol/bench-config.ts'

/**
 * What of a commissioned bench a reading needs. Keep the object for as long as the revision stands: the field of the coil
 * pair is tabulated once an object.
 */
export function readingBench(config: BenchConfig): ReadingBench {
  const { coilUncertainty, scale, instruments } = config
  const { digitSize: digitSizeVolts, ...anodeAccuracy } = instruments.anodeMeter.accuracy
  const { digitSize: digitSizeAmps, ...coilAccuracy } = instruments.coilMeter.accuracy
  return {
    coilPair: config.coilPair,
    uTurns: coilUncertainty.turns,
    uRadiusMetres: coilUncertainty.radiusMetres,
    uSeparationMetres: coilUncertainty.separationMetres,
    coilConnection: config.coilConnection,
    gun: config.gun,
    scale: {
      kind: scale.kind,
      graduationMetres: scale.graduationMetres,
      readableFraction: scale.readableFraction,
      distanceBehindMetres: scale.distanceBehindMetres,
      uDistanceBehindMetres: scale.uDistanceBehindMetres,
      eyeDistanceMetres: scale.eyeDistanceMetres,
    },
    beam: config.beam,
    anodeMeter: { ...anodeAccuracy, digitSizeVolts },
    coilMeter: { ...coilAccuracy, digitSizeAmps },
  }
}
