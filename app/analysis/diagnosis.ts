import { chiSquaredUpperTail, normalQuantile } from '#app/statistics/distributions.ts'
import { requireNotNegative } from '#app/statistics/domain.ts'
import {
  defaultPriors,
  type Effect,
  effects,
  fitSeries,
  type Prior,
  type Priors,
  type SeriesField,
  type SeriesFit,
  type SeriesReading,
  seriesPoints,
} from './series-model.ts'

/** Beyond this an effect does not occur at a bench in order: common practice, see `plausibleWords`. */
export const plausibleSizes: Record<Effect, number> = {
  // The earth's field is 25 to 65 µT, and only its part along the axis counts.
  strayFieldTesla: 65e-6,
  voltageOffsetVolts: 3,
  scaleOffsetMetres: 2e-3,
}

/** One combination of effects, fitted without priors. */
export type Subset = SeriesFit & {
  /** of a χ² at least this large by chance; null without degrees of freedom */
  pValue: number | null
  /** χ² + 2p + 2p(p + 1)/(n − p − 1); null where there are too few readings for it */
  aicc: number | null
  isPlausible: boolean
}

/**
 * What the readings support: `agreement` no effect is needed; `effect` one combination alone explains them; `ambiguous`
 * several do, and the readings do not tell them apart; `unexplained` none of a size that occurs does.
 */
export type Finding =
  | { kind: 'agreement' }
  | { kind: 'effect'; subset: Subset }
  | { kind: 'ambiguous'; subsets: Subset[] }
  | { kind: 'unexplained'; wouldNeed: { effect: Effect; size: Prior }[] }
  | { kind: 'too-few' }

export type StatedResult = {
  chargeToMass: number
  /** of the general model alone, and of what all readings share */
  independentUncertainty: number
  commonUncertainty: number
  standardUncertainty: number
  coverageFactor: number
  expandedUncertainty: number
}

export type Diagnosis = {
  /** Every combination that the readings determine, from none to all. */
  subsets: Subset[]
  /** The general model with every effect and its prior. */
  general: SeriesFit
  /** Null where nothing plausible explains the readings: then no value is stated. */
  stated: StatedResult | null
  finding: Finding
  /** Pairs of the general model that the readings alone hardly tell apart, with their correlation. */
  notApart: { a: Effect | 'chargeToMass'; b: Effect; correlation: number }[]
  /** Readings far from the general model: more than 3 standard deviations, or 2.5 with a large leverage. */
  outliers: { index: number; residual: number; leverage: number }[]
}

/** Below this the readings do not agree with a model. */
const REJECTED = 0.003
/** An effect counts where leaving it out is worse than chance explains. */
const NEEDED = 0.01
/** A combination whose AICc lies within this of the best one's is not told apart from it. */
const CLOSE = 6
const CORRELATED = 0.9

/**
 * Works out e/m of a series of readings with its uncertainty, and what shifts it.
 *
 * The stated result comes from the general model with every effect in it, each with the bench's commissioned value and
 * uncertainty as one more observation, whatever the finding is: choosing one combination and stating its error would claim
 * too much. A constant percentage of the scale, the coils' field or the voltmeter cannot be seen in such readings; it comes
 * in by `commonRelative`.
 *
 * @param series.readings at least one; with fewer than three nothing but the result is worked out
 * @param series.priors by default those of common practice
 * @param series.commonRelative standard uncertainty of e/m that all readings share, relative
 * @throws RangeError naming the argument
 */
export function diagnose(series: {
  readings: readonly SeriesReading[]
  field: SeriesField
  priors?: Priors
  commonRelative?: number
}): Diagnosis {
  const { readings, field, priors = defaultPriors, commonRelative = 0 } = series
  if (readings.length === 0) throw new RangeError('readings must not be empty')
  requireNotNegative('commonRelative', commonRelative)
  const points = seriesPoints(readings, field)
  const general = fitSeries(points, { effects, priors })
  const subsets = combinations.flatMap((wanted) => {
    try {
      return [judged(fitSeries(points, { effects: wanted }), points.length)]
    } catch (error) {
      // Fewer readings than parameters, or settings that do not tell these effects apart.
      if (error instanceof RangeError && /^readings must/.test(error.message)) return []
      throw error
    }
  })
  const finding = findingOf(subsets, readings.length)
  return {
    subsets,
    general,
    stated: finding.kind === 'unexplained' ? null : statedBy(general, commonRelative),
    finding,
    notApart: notApart(general, subsets),
    outliers: general.residuals.flatMap((residual, index) => {
      const leverage = general.leverages[index] as number
      const standardised = residual / Math.sqrt(Math.max(1e-9, 1 - leverage))
      const isFar = Math.abs(standardised) > (leverage > 0.5 ? 2.5 : 3)
      return isFar && readings.length > 3 ? [{ index, residual: standardised, leverage }] : []
    }),
  }
}

const combinations: Effect[][] = Array.from({ length: 2 ** effects.length }, (_, mask) =>
  effects.filter((_, i) => (mask >> i) & 1),
).sort((a, b) => a.length - b.length)

function judged(fit: SeriesFit, count: number): Subset {
  const p = 1 + fit.effects.length
  const rest = count - p - 1
  return {
    ...fit,
    pValue: fit.degreesOfFreedom > 0 ? chiSquaredUpperTail(fit.chiSquared, fit.degreesOfFreedom) : null,
    aicc: rest > 0 ? fit.chiSquared + 2 * p + (2 * p * (p + 1)) / rest : null,
    isPlausible: fit.effects.every((effect) => isPlausible(effect, fit.sizes[effect])),
  }
}

/** Whether a size, or one within two of its uncertainties, occurs. */
export function isPlausible(effect: Effect, size: Prior | undefined): boolean {
  if (!size) return true
  return Math.abs(size.value) - 2 * size.standardUncertainty <= plausibleSizes[effect]
}

function findingOf(subsets: readonly Subset[], count: number): Finding {
  const none = subsets.find(({ effects: wanted }) => wanted.length === 0)
  if (!none || count < 3 || none.pValue === null) return { kind: 'too-few' }
  const isGood = ({ pValue }: Subset) => pValue !== null && pValue >= REJECTED
  const supported = subsets.filter(
    (subset) =>
      subset.effects.length > 0 && isGood(subset) && subset.isPlausible && isNeeded(subset, subsets),
  )
  const gain = Math.max(0, ...supported.map((subset) => none.chiSquared - subset.chiSquared))
  // Agreement alone is not enough where one effect improves it beyond chance.
  if (isGood(none) && chiSquaredUpperTail(gain, 1) >= NEEDED) return { kind: 'agreement' }
  if (supported.length === 0) {
    if (isGood(none)) return { kind: 'agreement' }
    return {
      kind: 'unexplained',
      wouldNeed: subsets.flatMap(({ effects: wanted, sizes }) => {
        const [effect, ...others] = wanted
        const size = effect && sizes[effect]
        return effect && size && others.length === 0 ? [{ effect, size }] : []
      }),
    }
  }
  const rank = ({ aicc, chiSquared, effects: wanted }: Subset) => aicc ?? chiSquared + 2 * wanted.length
  const best = Math.min(...supported.map(rank))
  const close = supported.filter((subset) => rank(subset) <= best + CLOSE).sort((a, b) => rank(a) - rank(b))
  // A combination that holds a simpler one that does as well says nothing of its own.
  const simplest = close.filter(
    (subset) =>
      !close.some(
        (other) => other !== subset && other.effects.every((effect) => subset.effects.includes(effect)),
      ),
  )
  const [only, ...others] = simplest
  if (only && others.length === 0) return { kind: 'effect', subset: only }
  return { kind: 'ambiguous', subsets: simplest }
}

/** Whether each effect of a combination improves it beyond chance. */
function isNeeded(subset: Subset, subsets: readonly Subset[]): boolean {
  return subset.effects.every((effect) => {
    const without = subsets.find(
      (other) =>
        other.effects.length === subset.effects.length - 1 &&
        !other.effects.includes(effect) &&
        other.effects.every((it) => subset.effects.includes(it)),
    )
    if (!without) return true
    return chiSquaredUpperTail(Math.max(0, without.chiSquared - subset.chiSquared), 1) < NEEDED
  })
}

function statedBy(general: SeriesFit, commonRelative: number): StatedResult {
  const { chargeToMass, standardUncertainty: independentUncertainty } = general
  const commonUncertainty = commonRelative * chargeToMass
  const standardUncertainty = Math.hypot(independentUncertainty, commonUncertainty)
  // All uncertainties are stated ones, so that the factor is the normal distribution's.
  const coverageFactor = normalQuantile(0.975)
  return {
    chargeToMass,
    independentUncertainty,
    commonUncertainty,
    standardUncertainty,
    coverageFactor,
    expandedUncertainty: coverageFactor * standardUncertainty,
  }
}

function notApart(general: SeriesFit, subsets: readonly Subset[]): Diagnosis['notApart'] {
  const full = subsets.find(({ effects: wanted }) => wanted.length === effects.length)
  // Without priors where the readings determine all of it; else the priors are what tells the effects apart.
  const { correlations, effects: order } = full ?? general
  const names = ['chargeToMass', ...order] as const
  const pairs: Diagnosis['notApart'] = []
  for (let i = 0; i < names.length; i++)
    for (let j = Math.max(1, i + 1); j < names.length; j++) {
      const correlation = correlations[i]?.[j] ?? 0
      if (Math.abs(correlation) > CORRELATED)
        pairs.push({ a: names[i] as Effect | 'chargeToMass', b: names[j] as Effect, correlation })
    }
  return pairs
}
