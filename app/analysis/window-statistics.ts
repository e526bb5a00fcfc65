import { moments } from '#app/statistics/moments.ts'

/**
 * `effectiveCount` is the number of independent samples that would give the same uncertainty of the mean,
 * between 2 and `count`; `effectiveCount − 1` are the degrees of freedom.
 */
export type WindowStatistics = {
  count: number
  mean: number
  standardDeviation: number
  standardError: number
  effectiveCount: number
}

/**
 * Type A evaluation of a window of readings that follow each other closely: the standard error of the mean
 * takes their autocorrelation into account, for successive readings of a slow signal repeat each other.
 *
 * Where the last digit does not move, all values are equal and the standard error is 0. That is not the
 * uncertainty of the mean: the resolution must stand in the budget beside it, always.
 *
 * @param values at least two, at equal intervals
 * @throws RangeError naming `values`
 *
 * Source: variance of the mean of a stationary series, s²/n (1 + 2Σ(1 − k/n)rₖ), the sum ended by the
 * initial positive sequence of pairs of lags; s² corrected for what the mean of n dependent values takes
 * out of it.
 */
export function windowStatistics(values: ArrayLike<number>): WindowStatistics {
  const { count, mean, standardDeviation } = moments(values)
  if (standardDeviation === 0)
    return { count, mean, standardDeviation, standardError: 0, effectiveCount: count }
  const deviations = Float64Array.from({ length: count }, (_, i) => (values[i] as number) - mean)
  const inflation = autocorrelationTime(deviations)
  const effectiveCount = Math.min(count, Math.max(2, count / inflation))
  const variance = (standardDeviation ** 2 * (count - 1)) / count / (effectiveCount - 1)
  return { count, mean, standardDeviation, standardError: Math.sqrt(variance), effectiveCount }
}

/** 1 + 2Σ(1 − k/n)rₖ, at least 1. */
function autocorrelationTime(deviations: Float64Array): number {
  const count = deviations.length
  const product = (lag: number): number => {
    let sum = 0
    for (let i = lag; i < count; i++) sum += (deviations[i] as number) * (deviations[i - lag] as number)
    return sum
  }
  const squares = product(0)
  let sum = 0
  let previousPair = Number.POSITIVE_INFINITY
  for (let lag = 1; lag + 1 < count; lag += 2) {
    // The product over count − lag pairs already carries the factor 1 − k/n.
    const pair = Math.min((product(lag) + product(lag + 1)) / squares, previousPair)
    if (pair <= 0) break
    sum += pair
    previousPair = pair
  }
  return 1 + 2 * sum
}
