import { requireFinite } from '#app/statistics/domain.ts'
import type { UncertaintyBudget } from './budget.ts'
import type { Propagation } from './monte-carlo.ts'
import { numericalTolerance } from './numerical-tolerance.ts'

export type FirstOrderCheck = {
  agrees: boolean
  /** by how much the lower and the upper end of the first-order interval lie above those of Monte Carlo */
  lowDifference: number
  highDifference: number
  /** what the ends may differ by */
  tolerance: number
}

/**
 * Whether the interval of a first-order budget, value ± expanded uncertainty, agrees with the shortest interval
 * of Monte Carlo at both ends to half of the last stated digit of the standard uncertainty.
 *
 * Monte Carlo ought to be known to a fifth of the tolerance: run to two digits, it serves to compare one.
 *
 * @param digits of the standard uncertainty, 1 by default
 * @throws RangeError naming the argument
 *
 * Source: JCGM 101:2008, clause 8.
 */
export function checkFirstOrder(results: {
  budget: Pick<UncertaintyBudget, 'value' | 'standardUncertainty' | 'expandedUncertainty'>
  monteCarlo: Pick<Propagation, 'shortestInterval'>
  digits?: number
}): FirstOrderCheck {
  const { budget, monteCarlo, digits = 1 } = results
  const [low, high] = monteCarlo.shortestInterval
  requireFinite('budget.value', budget.value)
  requireFinite('budget.expandedUncertainty', budget.expandedUncertainty)
  requireFinite('monteCarlo.shortestInterval', low + high)
  const tolerance = numericalTolerance(budget.standardUncertainty, digits)
  const lowDifference = budget.value - budget.expandedUncertainty - low
  const highDifference = budget.value + budget.expandedUncertainty - high
  const agrees = Math.abs(lowDifference) <= tolerance && Math.abs(highDifference) <= tolerance
  return { agrees, lowDifference, highDifference, tolerance }
}
