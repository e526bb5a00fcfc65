import type { CoilPair } from '#app/physics/coil-field.ts'
import { centreFieldTesla } from '#app/physics/coil-field.ts'
import { speedOfLight } from '#app/physics/constants.ts'
import { evennessFactor } from '#app/physics/orbit.ts'
import { requireFinite, requireNotNegative, requirePositive } from '#app/statistics/domain.ts'
import { fitNonlinear, type NonlinearFit } from '#app/statistics/nonlinear-fit.ts'

/** One reading as a point of a series, with the standard uncertainties that are its own: what all readings share is no part of them. */
export type SeriesReading = {
  voltageVolts: number
  /** as measured, without a sign, which is in `polarity` */
  currentAmps: number
  diameterMetres: number
  uVoltage: number
  uCurrent: number
  uDiameter: number
  /** sense of the coils' field; 1 where it is left out */
  polarity?: 1 | -1
}

/**
 * The coils' field: the pair, the orbit then taken to be centred on its axis, or the factor k in teslas an ampere as
 * measured. `evenness` is what e/m from the centre field has to be multiplied with for an orbit of this radius, 1 by default.
 */
export type SeriesField =
  | { pair: CoilPair }
  | {
      teslaPerAmp: number
      evenness?: number | ((radiusMetres: number, polarity: 1 | -1) => number)
    }

export const effects = ['strayFieldTesla', 'voltageOffsetVolts', 'scaleOffsetMetres'] as const
export type Effect = (typeof effects)[number]

/** An effect as commissioned: what it is taken to be, and its standard uncertainty. */
export type Prior = { value: number; standardUncertainty: number }
export type Priors = Record<Effect, Prior>

/** Where nothing of a bench was measured: common practice. */
export const defaultPriors: Priors = {
  strayFieldTesla: { value: 0, standardUncertainty: 30e-6 },
  voltageOffsetVolts: { value: 0, standardUncertainty: 1.5 },
  scaleOffsetMetres: { value: 0, standardUncertainty: 0.5e-3 },
}

export type SeriesFit = {
  effects: Effect[]
  /** e/m in C/kg */
  chargeToMass: number
  standardUncertainty: number
  sizes: Partial<Record<Effect, Prior>>
  chiSquared: number
  degreesOfFreedom: number
  /** a reading each, over what it may be by its own uncertainties; priors take part in χ² and have none here */
  residuals: number[]
  leverages: number[]
  /** of e/m and the effects, in their order */
  correlations: number[][]
  covariance: number[][]
  conditionNumber: number
}

/** A reading with all that does not change while a fit goes on. */
export type SeriesPoint = {
  volts: number
  /** k·I·g, without a sign */
  tesla: number
  teslaPerAmp: number
  diameter: number
  sense: 1 | -1
  uVolts2: number
  uAmps2: number
  uDiameter2: number
}

/** What e/m is divided by while it is fitted, so that all parameters are near one. */
const ELEVEN = 1e11
const LIGHT_SQUARED = speedOfLight.value ** 2
const scaleOf: Record<Effect, number> = {
  strayFieldTesla: 30e-6,
  voltageOffsetVolts: 1.5,
  scaleOffsetMetres: 0.5e-3,
}

/**
 * Prepares the readings of a series, of which each is looked at, for `fitSeries`.
 *
 * @throws RangeError naming the argument of the reading: not finite, not above zero, no uncertainty at all
 */
export function seriesPoints(readings: readonly SeriesReading[], field: SeriesField): SeriesPoint[] {
  const k = 'pair' in field ? centreFieldTesla(field.pair, 1) : field.teslaPerAmp
  requirePositive('field.teslaPerAmp', k)
  return readings.map((reading, i) => {
    const at = (name: string) => `readings[${i}].${name}`
    const { voltageVolts, currentAmps, diameterMetres, uVoltage, uCurrent, uDiameter, polarity = 1 } = reading
    requirePositive(at('voltageVolts'), voltageVolts)
    requireFinite(at('voltageVolts'), voltageVolts)
    requirePositive(at('currentAmps'), currentAmps)
    requireFinite(at('currentAmps'), currentAmps)
    requirePositive(at('diameterMetres'), diameterMetres)
    requireFinite(at('diameterMetres'), diameterMetres)
    requireNotNegative(at('uVoltage'), uVoltage)
    requireNotNegative(at('uCurrent'), uCurrent)
    requireNotNegative(at('uDiameter'), uDiameter)
    if (uVoltage + uCurrent + uDiameter === 0)
      throw new RangeError(`${at('uDiameter')} must not be 0 where the other uncertainties are`)
    const evenness = evennessOf(field, diameterMetres / 2, polarity)
    requirePositive(`field.evenness of readings[${i}]`, evenness)
    const teslaPerAmp = k / Math.sqrt(evenness)
    return {
      volts: voltageVolts,
      tesla: teslaPerAmp * currentAmps,
      teslaPerAmp,
      diameter: diameterMetres,
      sense: polarity,
      uVolts2: uVoltage ** 2,
      uAmps2: uCurrent ** 2,
      uDiameter2: uDiameter ** 2,
    }
  })
}

function evennessOf(field: SeriesField, radius: number, polarity: 1 | -1): number {
  if ('pair' in field) return evennessFactor(field.pair, radius)
  const { evenness = 1 } = field
  return typeof evenness === 'number' ? evenness : evenness(radius, polarity)
}

/**
 * Fits f = 2(V − V₀) + η(V − V₀)²/c² − η(kIg + B₀)²((d − d₀)/2)² by least Σ f²/s², with e/m = η and the effects that are asked
 * for; the others are zero. s² is the variance of f by the readings' own uncertainties at the same parameters, so that a
 * fit with more effects never has the larger χ². With priors each effect's is one observation more.
 *
 * @param points as `seriesPoints` gives them
 * @throws RangeError naming `readings` where they are fewer than the parameters or do not determine them
 */
export function fitSeries(
  points: readonly SeriesPoint[],
  { effects: wanted, priors }: { effects: readonly Effect[]; priors?: Priors },
): SeriesFit {
  const extra = priors ? wanted.length : 0
  const size = 1 + wanted.length
  const count = points.length + extra
  if (count < size)
    throw new RangeError(
      `readings must be at least ${size - extra} for ${size} parameters, got ${points.length}`,
    )
  const places = effects.map((effect) => wanted.indexOf(effect))
  const start = startOf(points)
  const priorOf = (effect: Effect) => (priors as Priors)[effect]
  const from = (sizes: Partial<Record<Effect, number>>) => [
    start,
    ...wanted.map((effect) => (sizes[effect] ?? priors?.[effect].value ?? 0) / scaleOf[effect]),
  ]
  let fit: NonlinearFit
  try {
    fit = fitNonlinear({
      count,
      starts: [from({}), ...(priors ? [] : furtherStarts(wanted, from))],
      scales: new Array(size).fill(1),
      residuals: (parameters, residuals, jacobian) => {
        const [b, v, d] = places.map((place, i) =>
          place < 0 ? 0 : (parameters[1 + place] as number) * scaleOf[effects[i] as Effect],
        ) as [number, number, number]
        const eta = (parameters[0] as number) * ELEVEN
        if (!(eta > 0)) return false
        for (let i = 0; i < points.length; i++)
          if (!evaluate(points[i] as SeriesPoint, eta, b, v, d, i, residuals, jacobian, places, size))
            return false
        for (let i = 0; i < extra; i++) {
          const effect = wanted[i] as Effect
          const { value, standardUncertainty } = priorOf(effect)
          const row = points.length + i
          residuals[row] = ((parameters[1 + i] as number) * scaleOf[effect] - value) / standardUncertainty
          if (jacobian) {
            jacobian.fill(0, row * size, (row + 1) * size)
            jacobian[row * size + 1 + i] = scaleOf[effect] / standardUncertainty
          }
        }
        return true
      },
    })
  } catch (error) {
    if (error instanceof RangeError && error.message.startsWith('residuals'))
      throw new RangeError('readings must determine every parameter: take them at more different settings')
    throw error
  }
  const units = [ELEVEN, ...wanted.map((effect) => scaleOf[effect])]
  const [eta, ...sizes] = fit.parameters.map((value, i) => value * (units[i] as number)) as [
    number,
    ...number[],
  ]
  const [uEta, ...uSizes] = fit.errors.map((value, i) => value * (units[i] as number)) as [
    number,
    ...number[],
  ]
  return {
    effects: [...wanted],
    chargeToMass: eta,
    standardUncertainty: uEta,
    sizes: Object.fromEntries(
      wanted.map((effect, i) => [
        effect,
        { value: sizes[i] as number, standardUncertainty: uSizes[i] as number },
      ]),
    ),
    chiSquared: fit.chiSquared,
    degreesOfFreedom: fit.degreesOfFreedom,
    residuals: fit.residuals.slice(0, points.length),
    leverages: fit.leverages.slice(0, points.length),
    correlations: fit.correlations,
    covariance: fit.covariance.map((row, i) =>
      row.map((value, j) => value * (units[i] as number) * (units[j] as number)),
    ),
    conditionNumber: fit.conditionNumber,
  }
}

/** Far from zero too, since one effect can stand in for another. */
function furtherStarts(
  wanted: readonly Effect[],
  from: (sizes: Partial<Record<Effect, number>>) => number[],
): number[][] {
  const far: Record<Effect, readonly number[]> = {
    strayFieldTesla: [-150e-6, 150e-6],
    voltageOffsetVolts: [20],
    scaleOffsetMetres: [-5e-3],
  }
  return wanted.flatMap((effect) => far[effect].map((size) => from({ [effect]: size })))
}

/** The median of the readings' own e/m, in units of 10¹¹ C/kg. */
function startOf(points: readonly SeriesPoint[]): number {
  const own = points
    .map(({ volts, tesla, diameter }) => (2 * volts) / (tesla * (diameter / 2)) ** 2)
    .sort((a, b) => a - b)
  return (own[Math.floor(own.length / 2)] ?? 0) / ELEVEN
}

/** Residual f/s of one reading and its derivatives. */
function evaluate(
  point: SeriesPoint,
  eta: number,
  b: number,
  v: number,
  d: number,
  row: number,
  residuals: Float64Array,
  jacobian: Float64Array | null,
  places: readonly number[],
  size: number,
): boolean {
  const { tesla, teslaPerAmp, sense, uVolts2, uAmps2, uDiameter2 } = point
  const w = point.volts - v
  const field = tesla + sense * b
  const rho = (point.diameter - d) / 2
  if (!(w > 0 && rho > 0 && field > 0)) return false
  const fieldRho = field * rho
  const squares = fieldRho * fieldRho
  const f = 2 * w + (eta * w * w) / LIGHT_SQUARED - eta * squares
  const perVolt = 2 + (2 * eta * w) / LIGHT_SQUARED
  const perAmp = -2 * eta * fieldRho * rho * teslaPerAmp
  const perDiameter = -eta * field * fieldRho
  const variance = perVolt ** 2 * uVolts2 + perAmp ** 2 * uAmps2 + perDiameter ** 2 * uDiameter2
  const s = Math.sqrt(variance)
  residuals[row] = f / s
  if (!jacobian) return Number.isFinite(f / s)
  // ∂(f/s) = ∂f/s − f·∂(s²)/(2s³)
  const half = f / (s * variance)
  const put = (column: number, scale: number, perF: number, perVariance: number) => {
    jacobian[row * size + column] = scale * (perF / s - half * perVariance)
  }
  put(
    0,
    ELEVEN,
    (w * w) / LIGHT_SQUARED - squares,
    ((perVolt * 2 * w) / LIGHT_SQUARED) * uVolts2 +
      (perAmp ** 2 * uAmps2 + perDiameter ** 2 * uDiameter2) / eta,
  )
  const [placeB = -1, placeV = -1, placeD = -1] = places
  if (placeB >= 0)
    put(
      1 + placeB,
      scaleOf.strayFieldTesla,
      -2 * eta * sense * fieldRho * rho,
      perAmp * (-2 * eta * sense * rho * rho * teslaPerAmp) * uAmps2 +
        perDiameter * (-2 * eta * sense * fieldRho) * uDiameter2,
    )
  if (placeV >= 0)
    put(1 + placeV, scaleOf.voltageOffsetVolts, -perVolt, ((perVolt * -2 * eta) / LIGHT_SQUARED) * uVolts2)
  if (placeD >= 0)
    put(
      1 + placeD,
      scaleOf.scaleOffsetMetres,
      eta * field * fieldRho,
      perAmp * (2 * eta * fieldRho * teslaPerAmp) * uAmps2 +
        ((perDiameter * eta * field * field) / 2) * uDiameter2,
    )
  return Number.isFinite(f / s)
}

/**
 * How strongly each reading feels e/m and the effects: a row a reading with ∂(f/s) by e/m in units of 10¹¹ C/kg and by each
 * effect in units of its default prior, where no effect is present. The Fisher information is the sum of their squares.
 */
export function informationRows(points: readonly SeriesPoint[], chargeToMass: number): number[][] {
  const size = 1 + effects.length
  const residual = new Float64Array(1)
  const row = new Float64Array(size)
  return points.map((point) => {
    evaluate(point, chargeToMass, 0, 0, 0, 0, residual, row, [0, 1, 2], size)
    return [...row]
  })
}

/** What a row of `informationRows` counts in: units of e/m and of each effect. */
export const informationUnits = [ELEVEN, ...effects.map((effect) => scaleOf[effect])]
