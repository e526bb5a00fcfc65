import { requireFinite, requireNotNegative } from '#app/statistics/domain.ts'

/**
 * Standard uncertainty of an instrument specified as ±(a % of reading + n digits), taken as a rectangular
 * distribution: the bound divided by √3.
 *
 * @param specification.digits number n of last digits; `digitSize` is the size of one, in the unit of the
 *   reading
 * @returns in the unit of the reading
 * @throws RangeError naming the argument
 *
 * Source: JCGM 100:2008, 4.3.7.
 */
export function standardUncertaintyFromAccuracy(specification: {
  reading: number
  percentOfReading: number
  digits: number
  digitSize: number
}): number {
  const { reading, percentOfReading, digits, digitSize } = specification
  requireFinite('reading', reading)
  requireNotNegative('percentOfReading', percentOfReading)
  requireNotNegative('digits', digits)
  requireNotNegative('digitSize', digitSize)
  return standardUncertaintyFromHalfWidth((percentOfReading / 100) * Math.abs(reading) + digits * digitSize)
}

/**
 * Standard uncertainty that the resolution of an indication leaves: a rectangular distribution of full
 * width one step, step/√12.
 *
 * @throws RangeError naming `step`
 *
 * Source: JCGM 100:2008, F.2.2.1.
 */
export function standardUncertaintyFromResolution(step: number): number {
  requireNotNegative('step', step)
  return step / Math.sqrt(12)
}

/**
 * Standard uncertainty of a quantity known to lie within ± a half-width.
 *
 * @param shape of the distribution between the bounds, rectangular by default
 * @throws RangeError naming `halfWidth`
 *
 * Source: JCGM 100:2008, 4.3.7 and 4.3.9; arc sine (U-shaped): JCGM 101:2008, 6.4.6.
 */
export function standardUncertaintyFromHalfWidth(
  halfWidth: number,
  shape: 'rectangular' | 'triangular' | 'uShaped' = 'rectangular',
): number {
  requireNotNegative('halfWidth', halfWidth)
  const divisors = { rectangular: Math.sqrt(3), triangular: Math.sqrt(6), uShaped: Math.SQRT2 }
  return halfWidth / divisors[shape]
}
