import { effectiveDegreesOfFreedom } from '#app/metrology/coverage.ts'
import { fitCircle } from '#app/statistics/circle-fit.ts'
import { requireFinite } from '#app/statistics/domain.ts'
import { checkEllipse } from './ellipse-check.ts'
import { type PhotoScale, photoScale, type ScaleMark } from './photo-scale.ts'
import type { PhotoDiameter } from './reading-types.ts'

export type { ScaleMark } from './photo-scale.ts'
export type PhotoPoint = { x: number; y: number }

export type PhotoMeasurement = PhotoDiameter & {
  /** both together, on the scale */
  uDiameterMetres: number
  /** in pixels of the photo */
  circle: { centreX: number; centreY: number; radius: number }
  scale: PhotoScale
  /** of each point, how far outside the circle it lies, metres on the scale */
  residualsMetres: number[]
  /** part of the circle from the first point to the last, past the largest gap between two */
  arcDegrees: number
  isShortArc: boolean
  /**
   * where the points follow an ellipse beyond chance: how much longer its longest diameter is than its shortest, metres on
   * the scale; else null
   */
  ellipseMetres: number | null
}

/** Below this a pixel more or less at one point moves the radius by many. */
const leastArcDegrees = 20
const shortArcDegrees = 180
/** An ellipse by chance once in a hundred photos; one that is rounder than this moves the diameter by too little. */
const ellipseChance = 0.01
const leastEllipse = 0.005

/**
 * The diameter of a beam from points on a photo: the circle that fits them best by geometric distance, over the scale
 * that the marks give. It is the diameter as it stands on the scale; parallax is taken out where a reading is worked out.
 *
 * The circle's uncertainty has the scatter of the points about it, with n − 3 degrees of freedom, and always that of
 * meeting a line, which weighs by how much of the circle the points cover. The scale's holds the product of both relative
 * uncertainties, so that u(d)² = u(circle)² + u(scale)² is the variance of the quotient of the two, which are independent.
 *
 * @param points three or more, in pixels like the marks
 * @param graduationMetres a division of the scale
 * @throws RangeError naming `scaleMarks`, `points` or `graduationMetres`; also for points on a line, on one another, or
 *   on less than 20° of the circle
 */
export function measurePhoto({
  scaleMarks,
  points,
  graduationMetres,
}: {
  scaleMarks: readonly ScaleMark[]
  points: readonly PhotoPoint[]
  graduationMetres: number
}): PhotoMeasurement {
  const scale = photoScale(scaleMarks, graduationMetres)
  if (points.length < 3) throw new RangeError(`points must be at least three, got ${points.length}`)
  points.forEach(({ x, y }, i) => {
    requireFinite(`points[${i}].x`, x)
    requireFinite(`points[${i}].y`, y)
  })
  const { centreX, centreY, radius, radiusError, residuals, arcRadians } = fitCircle(points)
  const angles = points.map(({ x, y }) => Math.atan2(y - centreY, x - centreX))
  const arcDegrees = (arcRadians * 180) / Math.PI
  if (arcDegrees < leastArcDegrees)
    throw new RangeError(`points must cover ${leastArcDegrees}° of the circle, got ${arcDegrees.toFixed(1)}°`)

  const ellipse = checkEllipse(residuals, angles)
  const isEllipse =
    ellipse !== null && ellipse.p < ellipseChance && ellipse.axesDifference > leastEllipse * 2 * radius
  const metres = (pixels: number) => pixels / scale.pixelsPerMetre
  const diameterMetres = metres(2 * radius)
  const parts = [radiusError ?? 0, scale.uPointingPixels * Math.sqrt(radiusVariance(angles))]
  const relativeCircle = Math.hypot(...parts) / radius
  const relativeScale = scale.uPixelsPerMetre / scale.pixelsPerMetre
  const uCircleMetres = diameterMetres * relativeCircle
  const uScaleMetres = diameterMetres * relativeScale * Math.hypot(1, relativeCircle)
  return {
    diameterMetres,
    uCircleMetres,
    circleDegreesOfFreedom: effectiveDegreesOfFreedom(parts, [
      points.length > 3 ? points.length - 3 : Number.POSITIVE_INFINITY,
      Number.POSITIVE_INFINITY,
    ]),
    uScaleMetres,
    scaleDegreesOfFreedom: scale.degreesOfFreedom,
    uDiameterMetres: Math.hypot(uCircleMetres, uScaleMetres),
    circle: { centreX, centreY, radius },
    scale,
    residualsMetres: residuals.map(metres),
    arcDegrees,
    isShortArc: arcDegrees < shortArcDegrees,
    ellipseMetres: isEllipse ? metres(ellipse.axesDifference) : null,
  }
}

/** Variance of the radius for a unit variance of each point's distance: the last element of (JᵀJ)⁻¹, J's rows (−cos φ, −sin φ, −1). */
function radiusVariance(angles: readonly number[]): number {
  const sum = (of: (angle: number) => number) => angles.reduce((total, angle) => total + of(angle), 0)
  const [c, s] = [sum(Math.cos), sum(Math.sin)]
  const cc = sum((angle) => Math.cos(angle) ** 2)
  const ss = sum((angle) => Math.sin(angle) ** 2)
  const cs = sum((angle) => Math.cos(angle) * Math.sin(angle))
  const minor = cc * ss - cs ** 2
  // What the centre leaves of the points' count, by the Schur complement.
  return minor / (minor * angles.length - (c * c * ss - 2 * c * s * cs + s * s * cc))
}
