import { fUpperTail } from './distributions.ts'
import { requireFinite, requirePositive } from './domain.ts'

const CONVERGED = 1e-9
const MOST_ITERATIONS = 10_000

/**
 * Robust mean and standard deviation by algorithm A: values further than 1.5 deviations from the mean count as if they stood
 * there. Where more than half of the values are equal, so that the first deviation is zero, the mean absolute deviation
 * from the median starts it; where all are equal it is zero.
 *
 * @param values at least two
 * @throws RangeError naming `values`
 *
 * Source: ISO 13528:2015, C.3.1; ISO 5725-5:1998.
 */
export function algorithmA(values: readonly number[]): { mean: number; standardDeviation: number } {
  requireMany('values', values, 2)
  let mean = medianOf(values)
  let deviation = 1.483 * medianOf(values.map((value) => Math.abs(value - mean)))
  if (deviation === 0)
    deviation = (1.25 * values.reduce((sum, value) => sum + Math.abs(value - mean), 0)) / values.length
  if (deviation === 0) return { mean, standardDeviation: 0 }
  for (let i = 0; i < MOST_ITERATIONS; i++) {
    const reach = 1.5 * deviation
    const kept = values.map((value) => Math.min(mean + reach, Math.max(mean - reach, value)))
    const nextMean = kept.reduce((sum, value) => sum + value, 0) / kept.length
    const squares = kept.reduce((sum, value) => sum + (value - nextMean) ** 2, 0)
    const nextDeviation = 1.134 * Math.sqrt(squares / (kept.length - 1))
    const moved = Math.max(Math.abs(nextMean - mean), Math.abs(nextDeviation - deviation))
    mean = nextMean
    deviation = nextDeviation
    if (deviation === 0 || moved < CONVERGED * deviation) break
  }
  return { mean, standardDeviation: deviation }
}

export type WeightedMean = {
  mean: number
  /** internal: 1/√Σ(1/u²) */
  error: number
  /** not reduced */
  chiSquared: number
  /** √(χ²/(n − 1)): above 1 the values scatter more than their errors say; NaN for one value */
  birgeRatio: number
}

/**
 * Mean weighted by 1/u².
 *
 * @param errors standard uncertainties, one a value, above zero
 * @throws RangeError naming the argument
 *
 * Source: R. T. Birge, Physical Review 40 (1932) 207; Particle Data Group, Review of Particle Physics, introduction.
 */
export function weightedMean(values: readonly number[], errors: readonly number[]): WeightedMean {
  requirePairs(values, errors, 1)
  const weights = errors.map((error) => 1 / error ** 2)
  const total = sum(weights)
  // About the first value, so that what they share costs no digits.
  const first = values[0] as number
  const mean = first + sum(weights.map((weight, i) => weight * ((values[i] as number) - first))) / total
  const chiSquared = sum(weights.map((weight, i) => weight * ((values[i] as number) - mean) ** 2))
  return {
    mean,
    error: 1 / Math.sqrt(total),
    chiSquared,
    birgeRatio: values.length > 1 ? Math.sqrt(chiSquared / (values.length - 1)) : Number.NaN,
  }
}

export type Consensus = { mean: number; error: number; betweenVariance: number }

/**
 * Consensus of values that scatter between each other, with the between variance of DerSimonian and Laird.
 *
 * @throws RangeError naming the argument
 *
 * Source: R. DerSimonian, N. Laird, Controlled Clinical Trials 7 (1986) 177.
 */
export function derSimonianLaird(values: readonly number[], errors: readonly number[]): Consensus {
  requirePairs(values, errors, 2)
  const { chiSquared } = weightedMean(values, errors)
  const weights = errors.map((error) => 1 / error ** 2)
  const total = sum(weights)
  const scale = total - sum(weights.map((weight) => weight ** 2)) / total
  return consensusAt(values, errors, Math.max(0, (chiSquared - (values.length - 1)) / scale))
}

/**
 * The same with the between variance at which χ² of the weighted mean is its number of degrees of freedom.
 *
 * @throws RangeError naming the argument
 *
 * Source: R. C. Paule, J. Mandel, Journal of Research of the National Bureau of Standards 87 (1982) 377.
 */
export function mandelPaule(values: readonly number[], errors: readonly number[]): Consensus {
  requirePairs(values, errors, 2)
  const freedom = values.length - 1
  const excess = (variance: number) =>
    weightedMean(
      values,
      errors.map((error) => Math.hypot(error, Math.sqrt(variance))),
    ).chiSquared - freedom
  if (excess(0) <= 0) return consensusAt(values, errors, 0)
  let low = 0
  const mean = sum(values) / values.length
  let high = sum(values.map((value) => (value - mean) ** 2)) + 1e-300
  for (let i = 0; i < 200 && high - low > 1e-15 * high; i++) {
    const middle = (low + high) / 2
    if (excess(middle) > 0) low = middle
    else high = middle
  }
  return consensusAt(values, errors, (low + high) / 2)
}

function consensusAt(
  values: readonly number[],
  errors: readonly number[],
  betweenVariance: number,
): Consensus {
  const { mean, error } = weightedMean(
    values,
    errors.map((it) => Math.hypot(it, Math.sqrt(betweenVariance))),
  )
  return { mean, error, betweenVariance }
}

/** A value against an assigned one: |z| and |ζ| up to 2 are as they should be, from 3 on they are not; |Eₙ| up to 1 is. */
export type Scores = { z: number; zeta: number; en: number }

/**
 * z by a deviation that is set for all, ζ by the standard uncertainties, Eₙ by the expanded ones.
 *
 * @throws RangeError naming the uncertainty that is not above zero
 *
 * Source: ISO 13528:2015, 9.4 to 9.7.
 */
export function scores(result: {
  value: number
  standardUncertainty: number
  expandedUncertainty: number
  assigned: { value: number; standardUncertainty: number; expandedUncertainty: number }
  deviation: number
}): Scores {
  const { value, standardUncertainty, expandedUncertainty, assigned, deviation } = result
  requireFinite('value', value)
  requireFinite('assigned.value', assigned.value)
  requirePositive('deviation', deviation)
  const difference = value - assigned.value
  const combined = Math.hypot(standardUncertainty, assigned.standardUncertainty)
  const expanded = Math.hypot(expandedUncertainty, assigned.expandedUncertainty)
  requirePositive('standardUncertainty', combined)
  requirePositive('expandedUncertainty', expanded)
  return { z: difference / deviation, zeta: difference / combined, en: difference / expanded }
}

export type VarianceAnalysis = {
  f: number
  /** of an F at least this large by chance, where the groups do not differ */
  p: number
  degreesOfFreedom: { between: number; within: number }
  /** components of variance; the one between the groups is not below zero */
  betweenVariance: number
  withinVariance: number
  grandMean: number
}

/**
 * One-way analysis of variance of groups of values, as of the results at several benches.
 *
 * @param groups at least two, of which one has more than one value
 * @throws RangeError naming `groups`
 *
 * Source: JCGM 100:2008, H.5; D. C. Montgomery, Design and Analysis of Experiments, chapter 3.
 */
export function analyseVariance(groups: readonly (readonly number[])[]): VarianceAnalysis {
  if (groups.length < 2) throw new RangeError(`groups must be at least 2, got ${groups.length}`)
  groups.forEach((group, i) => {
    requireMany(`groups[${i}]`, group, 1)
  })
  const count = sum(groups.map((group) => group.length))
  const between = groups.length - 1
  const within = count - groups.length
  if (within < 1) throw new RangeError('groups must hold one with more than one value')
  const means = groups.map((group) => sum(group) / group.length)
  const grandMean = sum(groups.map((group, i) => group.length * (means[i] as number))) / count
  const betweenSquares = sum(groups.map((group, i) => group.length * ((means[i] as number) - grandMean) ** 2))
  const withinSquares = sum(
    groups.map((group, i) => sum(group.map((value) => (value - (means[i] as number)) ** 2))),
  )
  const withinVariance = withinSquares / within
  const meanSquare = betweenSquares / between
  const f = meanSquare / withinVariance
  const size = (count - sum(groups.map((group) => group.length ** 2)) / count) / between
  return {
    f,
    p: withinVariance > 0 ? fUpperTail(f, between, within) : betweenSquares > 0 ? 0 : 1,
    degreesOfFreedom: { between, within },
    betweenVariance: Math.max(0, (meanSquare - withinVariance) / size),
    withinVariance,
    grandMean,
  }
}

const sum = (values: readonly number[]): number => values.reduce((total, value) => total + value, 0)

function medianOf(values: readonly number[]): number {
  const sorted = [...values].sort((a, b) => a - b)
  const middle = sorted.length >> 1
  return sorted.length % 2 === 1
    ? (sorted[middle] as number)
    : ((sorted[middle - 1] as number) + (sorted[middle] as number)) / 2
}

function requireMany(name: string, values: readonly number[], least: number): void {
  if (values.length < least) throw new RangeError(`${name} must be at least ${least}, got ${values.length}`)
  values.forEach((value, i) => {
    requireFinite(`${name}[${i}]`, value)
  })
}

function requirePairs(values: readonly number[], errors: readonly number[], least: number): void {
  requireMany('values', values, least)
  if (errors.length !== values.length)
    throw new RangeError(`errors must be as many as values (${values.length}), got ${errors.length}`)
  errors.forEach((error, i) => {
    requirePositive(`errors[${i}]`, error)
    requireFinite(`errors[${i}]`, error)
  })
}
