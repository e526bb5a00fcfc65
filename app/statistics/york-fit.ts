import { chiSquaredUpperTail } from './distributions.ts'
import { requireFinite, requireNotNegative } from './domain.ts'
import { fitLine, type LineFit } from './line-fit.ts'

const MOST_ITERATIONS = 200
const CONVERGED = 1e-14

export type YorkFit = LineFit & { isConverged: boolean; iterations: number }

/**
 * A straight line through points whose coordinates both are uncertain, correlated or not. The errors come from the adjusted
 * points and are not scaled by χ². A point's residual is y − a − b x, its standardised residual that over what it may be by
 * both uncertainties, and its leverage the part that it has in the line at its own place.
 *
 * @param data.x, data.y, data.xError, data.yError as many as each other; standard uncertainties, of which one of a
 *   point may be zero
 * @param data.correlation between the errors of a point's two coordinates, one a point, between −1 and 1
 * @throws RangeError naming the argument: lengths that differ, fewer than two points, all x equal, both errors of a point
 *   zero
 *
 * Source: D. York et al., Unified equations for the slope, intercept, and standard errors of the best straight line,
 * American Journal of Physics 72 (2004) 367.
 */
export function fitYork(data: {
  x: ArrayLike<number>
  y: ArrayLike<number>
  xError: ArrayLike<number>
  yError: ArrayLike<number>
  correlation?: ArrayLike<number>
}): YorkFit {
  const points = pointsOf(data)
  const start = fitLine(data)
  let slope = start.slope
  let iterations = 0
  let isConverged = false
  let state = adjusted(points, slope)
  while (iterations < MOST_ITERATIONS && !isConverged) {
    iterations++
    const next = state.slope
    isConverged = Math.abs(next - slope) <= CONVERGED * Math.max(Math.abs(next), Number.MIN_VALUE)
    slope = next
    state = adjusted(points, slope)
  }
  const { weights, totalWeight, meanX, meanY, betas } = state
  const intercept = meanY - slope * meanX
  const places = betas.map((beta) => meanX + beta)
  const meanPlace = weighted(weights, places) / totalWeight
  const spread = weights.reduce((total, w, i) => total + w * ((places[i] as number) - meanPlace) ** 2, 0)
  if (!(spread > 0)) throw new RangeError('x must not be all equal')
  const slopeError = 1 / Math.sqrt(spread)
  const residuals = points.map(({ x, y }) => y - meanY - slope * (x - meanX))
  const chiSquared = weights.reduce((total, w, i) => total + w * (residuals[i] as number) ** 2, 0)
  const degreesOfFreedom = points.length - 2
  const reducedChiSquared = degreesOfFreedom > 0 ? chiSquared / degreesOfFreedom : Number.NaN
  const lineError = (at: number) => Math.sqrt(1 / totalWeight + (at - meanPlace) ** 2 / spread)
  const leverages = places.map((place, i) => (weights[i] as number) * lineError(place) ** 2)
  const squaresY = weights.reduce((total, w, i) => total + w * ((points[i]?.y ?? 0) - meanY) ** 2, 0)
  return {
    slope,
    intercept,
    slopeError,
    interceptError: lineError(0),
    covariance: -meanPlace / spread,
    residualDeviation: Math.sqrt(reducedChiSquared),
    rSquared: squaresY > 0 ? 1 - chiSquared / squaresY : 1,
    chiSquared,
    degreesOfFreedom,
    reducedChiSquared,
    pValue: degreesOfFreedom > 0 ? chiSquaredUpperTail(chiSquared, degreesOfFreedom) : null,
    residuals,
    standardisedResiduals: residuals.map((residual, i) => {
      const free = 1 - (leverages[i] as number)
      return free > 1e-12 ? residual * Math.sqrt((weights[i] as number) / free) : 0
    }),
    leverages,
    lineError,
    isConverged,
    iterations,
  }
}

type Point = { x: number; y: number; ux: number; uy: number; r: number }

/** Weights and adjusted places at a slope, and the slope that follows from them. */
function adjusted(points: readonly Point[], slope: number) {
  const weights = points.map(
    ({ ux, uy, r }) => 1 / (uy * uy + slope * slope * ux * ux - 2 * slope * r * ux * uy),
  )
  const totalWeight = weights.reduce((total, w) => total + w, 0)
  const meanX = weights.reduce((total, w, i) => total + w * (points[i]?.x ?? 0), 0) / totalWeight
  const meanY = weights.reduce((total, w, i) => total + w * (points[i]?.y ?? 0), 0) / totalWeight
  let upper = 0
  let lower = 0
  const betas = points.map(({ x, y, ux, uy, r }, i) => {
    const w = weights[i] as number
    const acrossX = x - meanX
    const acrossY = y - meanY
    const both = r * ux * uy
    const beta = w * (acrossX * uy * uy + slope * acrossY * ux * ux - (slope * acrossX + acrossY) * both)
    upper += w * beta * acrossY
    lower += w * beta * acrossX
    return beta
  })
  return { weights, totalWeight, meanX, meanY, betas, slope: upper / lower }
}

const weighted = (weights: readonly number[], values: readonly number[]): number =>
  weights.reduce((total, w, i) => total + w * (values[i] as number), 0)

function pointsOf({ x, y, xError, yError, correlation }: Parameters<typeof fitYork>[0]): Point[] {
  for (const [name, values] of Object.entries({ y, xError, yError, correlation }))
    if (values && values.length !== x.length)
      throw new RangeError(`${name} must be as many as x (${x.length}), got ${values.length}`)
  return Array.from(x, (value, i) => {
    const point = {
      x: value,
      y: y[i] as number,
      ux: xError[i] as number,
      uy: yError[i] as number,
      r: correlation?.[i] ?? 0,
    }
    requireNotNegative(`xError[${i}]`, point.ux)
    requireNotNegative(`yError[${i}]`, point.uy)
    requireFinite(`correlation[${i}]`, point.r)
    if (Math.abs(point.r) >= 1)
      throw new RangeError(`correlation[${i}] must lie between −1 and 1, got ${point.r}`)
    if (point.ux === 0 && point.uy === 0)
      throw new RangeError(`yError[${i}] must not be 0 where xError[${i}] is`)
    return point
  })
}
