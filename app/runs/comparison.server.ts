import { coverageFactor } from '../metrology/coverage.ts'
import { acceptedChargeToMass } from '../physics/accepted-value.ts'
import type { AnalysisView, StatedResult } from './analysis-view.ts'

/**
 * How the stated result stands to the accepted value, for those who may know it: the deviation in percent and in units of
 * the combined uncertainty. Where nothing is stated, that of the plain mean.
 */
export function compareToAccepted(
  stated: StatedResult | null,
  mean: AnalysisView['mean'],
): AnalysisView['comparison'] {
  const accepted = acceptedChargeToMass
  const percentOf = (value: number) => {
    const percent = (value / accepted.value - 1) * 100
    return `${Number(Math.abs(percent).toPrecision(2))} % ${percent < 0 ? 'below' : 'above'} the accepted value`
  }
  const shown = {
    accepted: { value: accepted.value, standardUncertainty: accepted.standardUncertainty },
    source: accepted.source,
  }
  if (!stated) {
    if (!mean) return null
    return { ...shown, sentence: `The plain mean lies ${percentOf(mean.value)} (${accepted.source}).` }
  }
  const zeta =
    (stated.value - accepted.value) / Math.hypot(stated.standardUncertainty, accepted.standardUncertainty)
  const agrees = Math.abs(zeta) <= coverageFactor(Number.POSITIVE_INFINITY)
  return {
    ...shown,
    sentence: `It lies ${percentOf(stated.value)}, ζ = ${zeta.toFixed(1).replace('-', '−')}: ${agrees ? 'it agrees with it within its uncertainty' : 'it does not agree with it'} (${accepted.source}).`,
  }
}
