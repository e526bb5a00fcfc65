import type { BudgetBench, Ruler } from '#app/analysis/reading.ts'
import type { BenchConfig, CommissionedBench } from '#app/protocol/bench-config.ts'

type Accuracy = BenchConfig['instruments']['anodeMeter']['accuracy']

/** Accuracy of what tells the anode voltage and the coil current, be it the bridge or a person who reads it. */
export function accuracyOf(config: CommissionedBench): { anode: Accuracy; coils: Accuracy } {
  if (config.instruments === null) return config.meters
  const { anodeMeter, coilMeter } = config.instruments
  return { anode: anodeMeter.accuracy, coils: coilMeter.accuracy }
}

/**
 * What of a commissioned bench a reading needs. Keep the object for as long as the revision stands: the field of the coil
 * pair is tabulated once an object.
 */
export function readingBench(config: CommissionedBench): BudgetBench {
  const { coilUncertainty, fieldFactor } = config
  const { anode, coils } = accuracyOf(config)
  const { digitSize: digitSizeVolts, ...anodeAccuracy } = anode
  const { digitSize: digitSizeAmps, ...coilAccuracy } = coils
  return {
    coilPair: config.coilPair,
    uTurns: coilUncertainty.turns,
    uRadiusMetres: coilUncertainty.radiusMetres,
    uSeparationMetres: coilUncertainty.separationMetres,
    ...(fieldFactor && { fieldFactor }),
    coilConnection: config.coilConnection,
    gun: config.gun,
    scale: scaleOf(config),
    beam: config.beam,
    anodeMeter: { ...anodeAccuracy, digitSizeVolts },
    coilMeter: { ...coilAccuracy, digitSizeAmps },
  }
}

function scaleOf({ scale }: CommissionedBench): Ruler | { kind: 'rungs' } {
  if (scale.kind === 'rungs') return { kind: 'rungs' }
  const { zeroMetres: _zero, lengthMetres: _length, ...ruler } = scale
  return ruler
}
