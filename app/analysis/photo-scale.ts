import { effectiveDegreesOfFreedom } from '#app/metrology/coverage.ts'
import { standardUncertaintyFromHalfWidth } from '#app/metrology/instrument-accuracy.ts'
import { requireFinite, requirePositive } from '#app/statistics/domain.ts'

/** A mark of the scale as it is met on a photo, in pixels, and where it stands on the scale. */
export type ScaleMark = { x: number; y: number; scaleMetres: number }

export type PhotoScale = {
  pixelsPerMetre: number
  uPixelsPerMetre: number
  /** Infinity with two marks, which have no scatter */
  degreesOfFreedom: number
  /** how far each mark stands from the even scale that fits all best, metres on the scale */
  residualsMetres: number[]
  /** standard uncertainty of one coordinate of any point that is met with care, in pixels */
  uPointingPixels: number
}

/** The part of a division to which a line is met under enlargement: common practice. A pixel is the least. */
const metPartOfDivision = 0.1

/**
 * The scale of a photo from two or more marks: least squares of pᵢ = p₀ + u·sᵢ with the marks' places sᵢ on the scale
 * exact and an error of the same size in both coordinates of each pᵢ; |u| is the scale. Its uncertainty is that of
 * meeting a line, always, and beside it the scatter of three or more marks, with 2n − 4 degrees of freedom.
 *
 * @param graduationMetres a division of the scale
 * @throws RangeError naming the argument; also for marks that all bear one number or lie on one another
 *
 * Source: JCGM 100:2008, H.3 (least squares), 4.3.7 (bounds).
 */
export function photoScale(marks: readonly ScaleMark[], graduationMetres: number): PhotoScale {
  requirePositive('graduationMetres', graduationMetres)
  const count = marks.length
  if (count < 2) throw new RangeError(`scaleMarks must be at least two, got ${count}`)
  marks.forEach((mark, i) => {
    for (const name of ['x', 'y', 'scaleMetres'] as const)
      requireFinite(`scaleMarks[${i}].${name}`, mark[name])
  })
  const mean = (of: (mark: ScaleMark) => number) => marks.reduce((sum, mark) => sum + of(mark), 0) / count
  const centre = { x: mean(({ x }) => x), y: mean(({ y }) => y), metres: mean((mark) => mark.scaleMetres) }
  const centred = marks.map(({ x, y, scaleMetres }) => ({
    x: x - centre.x,
    y: y - centre.y,
    metres: scaleMetres - centre.metres,
  }))
  const spread = centred.reduce((sum, { metres }) => sum + metres ** 2, 0)
  if (!(spread > 0)) throw new RangeError('scaleMarks must stand at two or more places of the scale')
  const u = {
    x: centred.reduce((sum, { x, metres }) => sum + x * metres, 0) / spread,
    y: centred.reduce((sum, { y, metres }) => sum + y * metres, 0) / spread,
  }
  const pixelsPerMetre = Math.hypot(u.x, u.y)
  if (!(pixelsPerMetre > 0)) throw new RangeError('scaleMarks must lie apart on the photo')

  const residuals = centred.map(({ x, y, metres }) => Math.hypot(x - u.x * metres, y - u.y * metres))
  const scatterFreedom = 2 * count - 4
  const squares = residuals.reduce((sum, residual) => sum + residual ** 2, 0)
  const scatter = scatterFreedom > 0 ? Math.sqrt(squares / scatterFreedom) : 0
  const halfWidthPixels = Math.max(1, metPartOfDivision * graduationMetres * pixelsPerMetre)
  const uPointingPixels = standardUncertaintyFromHalfWidth(halfWidthPixels)
  const parts = [scatter / Math.sqrt(spread), uPointingPixels / Math.sqrt(spread)]
  return {
    pixelsPerMetre,
    uPixelsPerMetre: Math.hypot(...parts),
    degreesOfFreedom: effectiveDegreesOfFreedom(parts, [
      scatterFreedom > 0 ? scatterFreedom : Number.POSITIVE_INFINITY,
      Number.POSITIVE_INFINITY,
    ]),
    residualsMetres: residuals.map((residual) => residual / pixelsPerMetre),
    uPointingPixels,
  }
}
