import { fitLine, type LineFit } from '#app/statistics/line-fit.ts'
import { fitYork } from '#app/statistics/york-fit.ts'
import { type SeriesField, type SeriesReading, seriesPoints } from './series-model.ts'

/**
 * Lines through a series: `origin` and `intercept` are V against (kIgr)²/2, through the origin and free; `root` is √(2V)/r
 * against kIg.
 */
export type LineKind = 'origin' | 'intercept' | 'root'

/** How a line is fitted: ordinary, weighted by the ordinate's uncertainties, or with those of both coordinates (York 2004). */
export type LineMethod = 'ordinary' | 'weighted' | 'both-errors'

export type SeriesLine = {
  line: LineKind
  method: LineMethod
  /** e/m in C/kg */
  chargeToMass: number
  standardUncertainty: number
  /** voltage at zero field of a free line in volts; stray field in teslas, intercept over slope, of the root form */
  second: { value: number; standardUncertainty: number } | null
  fit: LineFit
}

export type LinePoint = { x: number; y: number; ux: number; uy: number }

/** The readings as points of a line: volts against T² m²/2, or √V/m against teslas. Polarity is the sign of the abscissa of `root`. */
export function linePoints(
  readings: readonly SeriesReading[],
  field: SeriesField,
  line: LineKind,
): LinePoint[] {
  const points = seriesPoints(readings, field)
  return readings.map(({ voltageVolts, currentAmps, diameterMetres, uVoltage, uCurrent, uDiameter }, i) => {
    const tesla = points[i]?.tesla ?? 0
    const sense = points[i]?.sense ?? 1
    const radius = diameterMetres / 2
    const relativeCurrent = uCurrent / currentAmps
    const relativeDiameter = uDiameter / diameterMetres
    if (line !== 'root') {
      const x = (tesla * radius) ** 2 / 2
      return { x, y: voltageVolts, ux: 2 * x * Math.hypot(relativeCurrent, relativeDiameter), uy: uVoltage }
    }
    const y = Math.sqrt(2 * voltageVolts) / radius
    return {
      x: sense * tesla,
      y: sense * y,
      ux: tesla * relativeCurrent,
      uy: y * Math.hypot(uVoltage / (2 * voltageVolts), relativeDiameter),
    }
  })
}

/**
 * One line through a series by one method, and the e/m that its slope is: the slope itself, or its square in the root form,
 * whose intercept over slope is the stray field.
 *
 * @throws RangeError naming the argument: fewer readings than parameters, all at one setting, an ordinate without
 *   uncertainty where it weighs
 */
export function fitSeriesLine(
  readings: readonly SeriesReading[],
  field: SeriesField,
  { line, method }: { line: LineKind; method: LineMethod },
): SeriesLine {
  const points = linePoints(readings, field, line)
  const fit = fitPoints(points, { line, method })
  const { slope, intercept, slopeError, interceptError, covariance } = fit
  if (line !== 'root') {
    return {
      line,
      method,
      chargeToMass: slope,
      standardUncertainty: slopeError,
      second: line === 'origin' ? null : { value: intercept, standardUncertainty: interceptError },
      fit,
    }
  }
  const stray = intercept / slope
  return {
    line,
    method,
    chargeToMass: slope ** 2,
    standardUncertainty: 2 * Math.abs(slope) * slopeError,
    second: {
      value: stray,
      standardUncertainty:
        Math.sqrt(Math.max(0, interceptError ** 2 + (stray * slopeError) ** 2 - 2 * stray * covariance)) /
        Math.abs(slope),
    },
    fit,
  }
}

function fitPoints(
  points: readonly LinePoint[],
  { line, method }: { line: LineKind; method: LineMethod },
): LineFit {
  const x = points.map((point) => point.x)
  const y = points.map((point) => point.y)
  const throughOrigin = line === 'origin'
  if (method === 'ordinary') return fitLine({ x, y, throughOrigin })
  if (method === 'weighted') {
    points.forEach(({ uy }, i) => {
      if (uy === 0) throw new RangeError(`readings[${i}].uVoltage must not be 0 where it weighs`)
    })
    return fitLine({ x, y, weights: points.map(({ uy }) => 1 / uy ** 2), throughOrigin })
  }
  if (!throughOrigin)
    return fitYork({ x, y, xError: points.map(({ ux }) => ux), yError: points.map(({ uy }) => uy) })
  return fitThroughOrigin(points)
}

/** Through the origin the weight of a point is 1/(u²(y) + b²u²(x)) at the slope b that the line has: found by repetition. */
function fitThroughOrigin(points: readonly LinePoint[]): LineFit {
  const x = points.map((point) => point.x)
  const y = points.map((point) => point.y)
  let fit = fitLine({ x, y, throughOrigin: true })
  for (let i = 0; i < 100; i++) {
    const { slope } = fit
    fit = fitLine({
      x,
      y,
      weights: points.map(({ ux, uy }) => 1 / (uy ** 2 + (slope * ux) ** 2)),
      throughOrigin: true,
    })
    if (Math.abs(fit.slope - slope) <= 1e-14 * Math.abs(slope)) break
  }
  return fit
}
