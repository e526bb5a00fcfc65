import { requireFinite } from './domain.ts'

/**
 * Allan deviation of readings at a steady interval, m of them averaged: √(½⟨(ȳₖ₊₁ − ȳₖ)²⟩) over neighbouring means.
 *
 * @param values at least 2m
 * @throws RangeError naming `values` (fewer, not finite) or `m` (not a whole number from 1)
 *
 * Source: NIST SP 1065 (W. J. Riley, 2008), 5.2.2.
 */
export function allanDeviation(values: ArrayLike<number>, m: number): number {
  const means = meansOf(values, m)
  let squares = 0
  const pairs = Math.floor(values.length / m) - 1
  for (let k = 0; k < pairs; k++) squares += (means((k + 1) * m) - means(k * m)) ** 2
  return Math.sqrt(squares / (2 * pairs))
}

/**
 * The same over every pair of neighbouring means, one for each reading that begins one: it uses all of the record and
 * is the better known.
 *
 * @throws RangeError as `allanDeviation`
 *
 * Source: NIST SP 1065, 5.2.4.
 */
export function overlappingAllanDeviation(values: ArrayLike<number>, m: number): number {
  const means = meansOf(values, m)
  let squares = 0
  const pairs = values.length - 2 * m + 1
  for (let k = 0; k < pairs; k++) squares += (means(k + m) - means(k)) ** 2
  return Math.sqrt(squares / (2 * pairs))
}

/** A point of the curve: `m` readings averaged, over so many seconds, with about how far the deviation is off by chance. */
export type AllanPoint = { m: number; seconds: number; deviation: number; standardUncertainty: number }

/**
 * The overlapping Allan deviation for one, two, four … readings averaged, up to a quarter of the record.
 *
 * @param intervalSeconds between two readings
 * @returns at least one point
 * @throws RangeError naming `values` (fewer than eight, not finite) or `intervalSeconds`
 */
export function allanCurve(values: ArrayLike<number>, intervalSeconds: number): AllanPoint[] {
  if (!(intervalSeconds > 0 && intervalSeconds < Number.POSITIVE_INFINITY))
    throw new RangeError(`intervalSeconds must be above 0, got ${intervalSeconds}`)
  if (values.length < 8) throw new RangeError(`values must be at least 8 for a curve, got ${values.length}`)
  const points: AllanPoint[] = []
  for (let m = 1; m <= values.length / 4; m *= 2) {
    const deviation = overlappingAllanDeviation(values, m)
    // Independent pairs are about as many as whole means less one; common practice for a rough bar.
    const freedom = Math.max(1, Math.floor(values.length / m) - 1)
    points.push({
      m,
      seconds: m * intervalSeconds,
      deviation,
      standardUncertainty: deviation / Math.sqrt(2 * freedom),
    })
  }
  return points
}

/** Mean of the m values from a place on, from running sums about the first value, so that no digits are lost. */
function meansOf(values: ArrayLike<number>, m: number): (from: number) => number {
  if (!(Number.isInteger(m) && m >= 1)) throw new RangeError(`m must be a whole number from 1, got ${m}`)
  if (values.length < 2 * m)
    throw new RangeError(`values must be at least ${2 * m} for ${m} averaged, got ${values.length}`)
  const first = values[0] as number
  const sums = new Float64Array(values.length + 1)
  for (let i = 0; i < values.length; i++) {
    requireFinite(`values[${i}]`, values[i] as number)
    sums[i + 1] = (sums[i] as number) + ((values[i] as number) - first)
  }
  return (from) => ((sums[from + m] as number) - (sums[from] as number)) / m
}
