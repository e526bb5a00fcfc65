import { fUpperTail } from '#app/statistics/distributions.ts'
import { requireFinite } from '#app/statistics/domain.ts'
import { solveTriangle, triangulate } from '#app/statistics/small-matrix.ts'

export type EllipseCheck = {
  /** by how much the longest diameter exceeds the shortest, in the unit of the residuals */
  axesDifference: number
  /** probability of so much or more on a true circle, by chance */
  p: number
}

/**
 * Whether points about their best circle follow an ellipse instead, as the beam does for a camera that looks from aside:
 * the part of their distances that goes as the double angle, a·cos 2φ + b·sin 2φ, beside what a shift of the centre and
 * of the radius can take up. Its longest diameter is 4√(a² + b²) above the shortest.
 *
 * @param residuals of the points, outside positive
 * @param angles of the points about the centre, in radians
 * @returns null for fewer than seven points, which leave too little to judge by
 * @throws RangeError naming `residuals` or `angles`
 *
 * Source: the F test of two further terms of a linear model, as in N. R. Draper and H. Smith, Applied Regression Analysis,
 * 3rd ed. (1998), 6.1 (from memory).
 */
export function checkEllipse(residuals: readonly number[], angles: readonly number[]): EllipseCheck | null {
  const count = residuals.length
  if (angles.length !== count)
    throw new RangeError(`angles must be as many as residuals (${count}), got ${angles.length}`)
  residuals.forEach((residual, i) => {
    requireFinite(`residuals[${i}]`, residual)
    requireFinite(`angles[${i}]`, angles[i] as number)
  })
  const terms = 5
  if (count < terms + 2) return null
  const matrix = Float64Array.from(
    angles.flatMap((phi) => [1, Math.cos(phi), Math.sin(phi), Math.cos(2 * phi), Math.sin(2 * phi)]),
  )
  const right = Float64Array.from(residuals)
  triangulate(matrix, count, terms, right)
  const squares = (from: number, to: number) => right.slice(from, to).reduce((sum, it) => sum + it ** 2, 0)
  const taken = squares(3, terms) / 2
  const left = squares(terms, count) / (count - terms)
  const [, , , a = 0, b = 0] = solveTriangle(matrix.slice(0, terms * terms), terms, right)
  return {
    axesDifference: 4 * Math.hypot(a, b),
    p: left > 0 ? fUpperTail(taken / left, 2, count - terms) : taken > 0 ? 0 : 1,
  }
}
