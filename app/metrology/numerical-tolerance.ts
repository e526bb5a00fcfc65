import { requireNotNegative } from '#app/statistics/domain.ts'

/**
 * Half of the last digit of a standard uncertainty that is stated with so many significant digits: 0.05 for 2.1,
 * written with two.
 *
 * @param digits whole number from 1 to 15
 * @returns 0 for an uncertainty of 0
 * @throws RangeError naming the argument
 *
 * Source: JCGM 101:2008, 7.9.2.
 */
export function numericalTolerance(standardUncertainty: number, digits: number): number {
  requireNotNegative('standardUncertainty', standardUncertainty)
  if (!Number.isInteger(digits) || digits < 1 || digits > 15) {
    throw new RangeError(`digits must be a whole number from 1 to 15, got ${digits}`)
  }
  if (standardUncertainty === 0) return 0
  // Rounded first: 0.0996 is stated as 0.10.
  const exponent = Number(standardUncertainty.toExponential(digits - 1).split('e')[1])
  return Number(`0.5e${exponent - digits + 1}`)
}
