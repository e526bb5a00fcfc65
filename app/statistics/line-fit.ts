import { chiSquaredUpperTail } from './distributions.ts'
import { requireFinite, requirePositive } from './domain.ts'

export type LineFit = {
  slope: number
  /** 0 for a line through the origin */
  intercept: number
  slopeError: number
  /** 0 for a line through the origin */
  interceptError: number
  /** of slope and intercept */
  covariance: number
  /** √(Σ w r²/ν), with weights relative to the stated uncertainties */
  residualDeviation: number
  /** with an intercept about the mean of y, through the origin about zero */
  rSquared: number
  /** Σ w r²; without weights the residual sum of squares */
  chiSquared: number
  degreesOfFreedom: number
  reducedChiSquared: number
  /** of a χ² at least this large by chance; null without weights, where the scale is estimated from the residuals */
  pValue: number | null
  residuals: number[]
  /** each residual over its own standard deviation; 0 where the line has to pass through the point */
  standardisedResiduals: number[]
  leverages: number[]
  /** standard uncertainty of the line at x */
  lineError: (x: number) => number
}

/**
 * A straight line by least squares, ordinary or weighted, free or through the origin.
 *
 * Without weights the errors come from the residuals; with weights, 1/u² of each y, they are the internal ones, which
 * the residuals do not change. Sums are taken about the weighted means, so that values far from zero cost no digits.
 *
 * @param data.x, data.y as many as each other
 * @param data.weights above zero, one a point
 * @throws RangeError naming `x` (fewer points than parameters, all equal, all zero through the origin), `y` or
 *   `weights` (of another length, or out of their domain)
 *
 * Source: N. R. Draper, H. Smith, Applied Regression Analysis, 3rd ed., chapters 1, 3 and 9.
 */
export function fitLine(data: {
  x: ArrayLike<number>
  y: ArrayLike<number>
  weights?: ArrayLike<number>
  throughOrigin?: boolean
}): LineFit {
  const { throughOrigin = false } = data
  const x = Array.from(data.x)
  const y = Array.from(data.y)
  const count = x.length
  const weights = data.weights ? Array.from(data.weights) : x.map(() => 1)
  requirePoints({ x, y, weights }, throughOrigin ? 1 : 2)
  const totalWeight = sum(weights)
  const meanX = throughOrigin ? 0 : sum(x.map((xi, i) => weight(i) * xi)) / totalWeight
  const meanY = throughOrigin ? 0 : sum(y.map((yi, i) => weight(i) * yi)) / totalWeight
  const squaresX = sum(x.map((xi, i) => weight(i) * (xi - meanX) ** 2))
  if (!(squaresX > 0))
    throw new RangeError(throughOrigin ? 'x must not be all zero' : 'x must not be all equal')
  const products = sum(x.map((xi, i) => weight(i) * (xi - meanX) * ((y[i] as number) - meanY)))
  const first = products / squaresX
  // A second pass over what is left takes up what rounding lost in the first.
  const rest = y.map((yi, i) => yi - meanY - first * ((x[i] as number) - meanX))
  const restMean = throughOrigin ? 0 : sum(rest.map((ri, i) => weight(i) * ri)) / totalWeight
  const correction =
    sum(rest.map((ri, i) => weight(i) * (ri - restMean) * ((x[i] as number) - meanX))) / squaresX
  const slope = first + correction
  const residuals = rest.map((ri, i) => ri - restMean - correction * ((x[i] as number) - meanX))
  const intercept = throughOrigin ? 0 : meanY + restMean - slope * meanX

  const chiSquared = sum(residuals.map((ri, i) => weight(i) * ri * ri))
  const degreesOfFreedom = count - (throughOrigin ? 1 : 2)
  const reducedChiSquared = degreesOfFreedom > 0 ? chiSquared / degreesOfFreedom : Number.NaN
  const scale = data.weights ? 1 : Math.sqrt(reducedChiSquared)
  const slopeError = scale / Math.sqrt(squaresX)
  const perWeight = throughOrigin ? 0 : 1 / totalWeight
  const leverages = x.map((xi, i) => weight(i) * (perWeight + (xi - meanX) ** 2 / squaresX))
  const squaresY = sum(y.map((yi, i) => weight(i) * (yi - meanY) ** 2))
  return {
    slope,
    intercept,
    slopeError,
    interceptError: throughOrigin ? 0 : scale * Math.sqrt(perWeight + meanX ** 2 / squaresX),
    covariance: throughOrigin ? 0 : (-meanX * scale ** 2) / squaresX,
    residualDeviation: Math.sqrt(reducedChiSquared),
    rSquared: squaresY > 0 ? 1 - chiSquared / squaresY : 1,
    chiSquared,
    degreesOfFreedom,
    reducedChiSquared,
    pValue: data.weights && degreesOfFreedom > 0 ? chiSquaredUpperTail(chiSquared, degreesOfFreedom) : null,
    residuals,
    standardisedResiduals: residuals.map((ri, i) => {
      const free = 1 - (leverages[i] as number)
      const deviation = scale * Math.sqrt(Math.max(0, free) / weight(i))
      return deviation > 0 && free > 1e-12 ? ri / deviation : 0
    }),
    leverages,
    lineError: (at) => scale * Math.sqrt(perWeight + (at - meanX) ** 2 / squaresX),
  }

  function weight(i: number): number {
    return weights[i] as number
  }
}

function requirePoints(
  { x, y, weights }: { x: number[]; y: number[]; weights: number[] },
  parameters: number,
): void {
  if (y.length !== x.length) throw new RangeError(`y must be as many as x (${x.length}), got ${y.length}`)
  if (weights.length !== x.length)
    throw new RangeError(`weights must be as many as x (${x.length}), got ${weights.length}`)
  x.forEach((value, i) => {
    requireFinite(`x[${i}]`, value)
  })
  y.forEach((value, i) => {
    requireFinite(`y[${i}]`, value)
  })
  weights.forEach((value, i) => {
    requirePositive(`weights[${i}]`, value)
    requireFinite(`weights[${i}]`, value)
  })
  if (x.length < parameters)
    throw new RangeError(`x must have at least ${parameters} points for this line, got ${x.length}`)
}

/** Neumaier's compensated sum. */
function sum(values: readonly number[]): number {
  let total = 0
  let lost = 0
  for (const value of values) {
    const next = total + value
    lost += Math.abs(total) >= Math.abs(value) ? total - next + value : value - next + total
    total = next
  }
  return total + lost
}
