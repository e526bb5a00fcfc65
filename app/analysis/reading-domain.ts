import {
  requireDegreesOfFreedom,
  requireFinite,
  requireNotNegative,
  requirePositive,
} from '#app/statistics/domain.ts'
import type { BudgetBench, Reading } from './reading-types.ts'

/** @throws RangeError naming what of voltage or current is out of its domain; the edges are looked at by `edgesOf` */
export function requireReading(reading: Reading): void {
  requirePositive('voltageVolts', reading.voltageVolts)
  requireNotNegative('uVoltageVolts', reading.uVoltageVolts)
  requireCurrent('currentAmps', reading.currentAmps)
  requireNotNegative('uCurrentAmps', reading.uCurrentAmps)
  requireDegreesOfFreedom(
    'voltageDegreesOfFreedom',
    reading.voltageDegreesOfFreedom ?? Number.POSITIVE_INFINITY,
  )
  requireDegreesOfFreedom(
    'currentDegreesOfFreedom',
    reading.currentDegreesOfFreedom ?? Number.POSITIVE_INFINITY,
  )
  requireNotNegative('voltageDigitVolts', reading.voltageDigitVolts ?? 0)
  requireNotNegative('currentDigitAmps', reading.currentDigitAmps ?? 0)
}

/**
 * The coil pair and the gun are looked at when they are tabulated.
 *
 * @throws RangeError naming what of the bench is out of its domain
 */
export function requireBench(bench: BudgetBench): void {
  const { scale, beam, anodeMeter, coilMeter, fieldFactor } = bench
  if (scale.kind !== 'rungs') {
    requirePositive('scale.graduationMetres', scale.graduationMetres)
    requirePositive('scale.readableFraction', scale.readableFraction)
    requireNotNegative('scale.uDistanceBehindMetres', scale.uDistanceBehindMetres)
  }
  requireNotNegative('beam.halfWidthMetres', beam.halfWidthMetres)
  requireNotNegative('anodeMeter.percentOfReading', anodeMeter.percentOfReading)
  requireNotNegative('anodeMeter.digits', anodeMeter.digits)
  requireNotNegative('anodeMeter.digitSizeVolts', anodeMeter.digitSizeVolts)
  requireFinite('anodeMeter.correctionVolts', anodeMeter.correctionVolts ?? 0)
  requireNotNegative('anodeMeter.uCorrectionVolts', anodeMeter.uCorrectionVolts ?? 0)
  requireNotNegative('coilMeter.percentOfReading', coilMeter.percentOfReading)
  requireNotNegative('coilMeter.digits', coilMeter.digits)
  requireNotNegative('coilMeter.digitSizeAmps', coilMeter.digitSizeAmps)
  if (bench.coilPair) {
    requireNotNegative('uTurns', bench.uTurns ?? 0)
    requireNotNegative('uRadiusMetres', bench.uRadiusMetres ?? 0)
    requireNotNegative('uSeparationMetres', bench.uSeparationMetres ?? 0)
  }
  if (fieldFactor) {
    requirePositive('fieldFactor.teslaPerAmp', fieldFactor.teslaPerAmp)
    requireNotNegative('fieldFactor.standardUncertainty', fieldFactor.standardUncertainty)
  }
}

/** @throws RangeError naming what the scale of the bench cannot give */
export function requireScale(scale: BudgetBench['scale'], { leftEdges, given }: Reading): void {
  if (scale.kind === 'rungs' && leftEdges.length > 0)
    throw new RangeError('leftEdges must be empty: the scale of this bench has rungs')
  if (scale.kind !== 'rungs' && given?.source === 'rung')
    throw new RangeError('given.source must be stated: the scale of this bench has no rungs')
}

/** @throws RangeError naming the argument unless it is finite and not 0 */
export function requireCurrent(name: string, amps: number): void {
  requireFinite(name, amps)
  if (amps === 0) throw new RangeError(`${name} must not be 0: without a field there is no orbit`)
}
