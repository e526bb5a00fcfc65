import { studentQuantile } from '#app/statistics/distributions.ts'
import { requireDegreesOfFreedom, requireNotNegative, requireProbability } from '#app/statistics/domain.ts'

/**
 * Effective degrees of freedom by the Welch-Satterthwaite formula, (Σu²)²/Σ(u⁴/ν), for independent inputs.
 * The result is real and is not rounded.
 *
 * @param contributions |c|u of each input, in the unit of the result
 * @param degreesOfFreedom ν of each input, Infinity accepted
 * @returns Infinity when no contribution has finite degrees of freedom
 * @throws RangeError naming the argument; also for arrays of different lengths or with nothing in them
 *
 * Source: JCGM 100:2008, G.4.
 */
export function effectiveDegreesOfFreedom(
  contributions: readonly number[],
  degreesOfFreedom: readonly number[],
): number {
  if (contributions.length === 0) throw new RangeError('contributions must not be empty')
  if (contributions.length !== degreesOfFreedom.length) {
    throw new RangeError(
      `degreesOfFreedom must be as many as contributions (${contributions.length}), got ${degreesOfFreedom.length}`,
    )
  }
  let largest = 0
  for (let i = 0; i < contributions.length; i++) {
    const contribution = contributions[i] as number
    const nu = degreesOfFreedom[i] as number
    if (!(contribution >= 0 && contribution < Number.POSITIVE_INFINITY && nu > 0)) {
      requireNotNegative(`contributions[${i}]`, contribution)
      requireDegreesOfFreedom(`degreesOfFreedom[${i}]`, nu)
    }
    if (contribution > largest) largest = contribution
  }
  if (largest === 0) return Number.POSITIVE_INFINITY
  let variance = 0
  let perFreedom = 0
  for (let i = 0; i < contributions.length; i++) {
    // Scaled, so that fourth powers neither overflow nor vanish.
    const square = ((contributions[i] as number) / largest) ** 2
    variance += square
    perFreedom += (square * square) / (degreesOfFreedom[i] as number)
  }
  return perFreedom > 0 ? (variance * variance) / perFreedom : Number.POSITIVE_INFINITY
}

/**
 * Coverage factor of a symmetric interval by Student's t.
 *
 * @param degreesOfFreedom real, not rounded, Infinity accepted
 * @param probability of the interval, 0.95 by default
 * @throws RangeError naming the argument
 */
export function coverageFactor(degreesOfFreedom: number, probability = 0.95): number {
  requireProbability('probability', probability)
  return studentQuantile((1 + probability) / 2, degreesOfFreedom)
}

/**
 * Combined and expanded uncertainty (95 %, Student's t) of independent contributions.
 *
 * @param contributions |c|u of each input, in the unit of the result
 * @param degreesOfFreedom ν of each input, Infinity accepted
 * @throws RangeError as `effectiveDegreesOfFreedom` does
 */
export function expandIndependent(contributions: readonly number[], degreesOfFreedom: readonly number[]) {
  const effective = effectiveDegreesOfFreedom(contributions, degreesOfFreedom)
  const standardUncertainty = Math.sqrt(contributions.reduce((sum, part) => sum + part * part, 0))
  const k = coverageFactor(effective)
  return {
    standardUncertainty,
    effectiveDegreesOfFreedom: effective,
    coverageFactor: k,
    expandedUncertainty: k * standardUncertainty,
  }
}
