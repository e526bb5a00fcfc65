import { normalUpperTail } from './distributions.ts'
import { requireFinite } from './domain.ts'

/**
 * Theil and Sen's slope of readings at a steady interval, an interval: the median of the slopes of all pairs. A few readings
 * far off hardly move it.
 *
 * @param values at least two
 * @throws RangeError naming `values`
 *
 * Source: P. K. Sen, Journal of the American Statistical Association 63 (1968) 1379.
 */
export function theilSen(values: ArrayLike<number>): number {
  requireValues(values, 2)
  const slopes = new Float64Array((values.length * (values.length - 1)) / 2)
  let place = 0
  for (let i = 0; i < values.length; i++)
    for (let j = i + 1; j < values.length; j++)
      slopes[place++] = ((values[j] as number) - (values[i] as number)) / (j - i)
  slopes.sort()
  const middle = slopes.length >> 1
  return slopes.length % 2 === 1
    ? (slopes[middle] as number)
    : ((slopes[middle - 1] as number) + (slopes[middle] as number)) / 2
}

export type MannKendall = {
  /** pairs that rise less pairs that fall */
  s: number
  /** with the correction for continuity */
  z: number
  /** two-sided: of a trend at least this strong by chance in readings that follow each other without memory */
  p: number
}

/**
 * Mann and Kendall's test for a trend, its variance corrected for ties.
 *
 * @param values at least three
 * @throws RangeError naming `values`
 *
 * Source: M. G. Kendall, Rank Correlation Methods, chapter 4; H. B. Mann, Econometrica 13 (1945) 245.
 */
export function mannKendall(values: ArrayLike<number>): MannKendall {
  requireValues(values, 3)
  const count = values.length
  let s = 0
  for (let i = 0; i < count; i++)
    for (let j = i + 1; j < count; j++) s += Math.sign((values[j] as number) - (values[i] as number))
  const tied = new Map<number, number>()
  for (let i = 0; i < count; i++) tied.set(values[i] as number, (tied.get(values[i] as number) ?? 0) + 1)
  let variance = count * (count - 1) * (2 * count + 5)
  for (const ties of tied.values()) variance -= ties * (ties - 1) * (2 * ties + 5)
  variance /= 18
  const z = variance > 0 ? (s - Math.sign(s)) / Math.sqrt(variance) : 0
  return { s, z, p: Math.min(1, 2 * normalUpperTail(Math.abs(z))) }
}

function requireValues(values: ArrayLike<number>, least: number): void {
  if (values.length < least) throw new RangeError(`values must be at least ${least}, got ${values.length}`)
  for (let i = 0; i < values.length; i++) requireFinite(`values[${i}]`, values[i] as number)
}
