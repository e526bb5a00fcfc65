import type { Diagnosis } from '../analysis/diagnosis.ts'
import { isPlausible } from '../analysis/diagnosis.ts'
import { combinationWords, effectUnit, effectWords, inUnit, sizeWords } from '../analysis/diagnosis-words.ts'
import type { CommonPart } from '../analysis/series-input.ts'
import { fitSeriesLine } from '../analysis/series-lines.ts'
import {
  type Effect,
  effects,
  type Prior,
  type SeriesField,
  type SeriesReading,
} from '../analysis/series-model.ts'
import { coverageFactor } from '../metrology/coverage.ts'
import { moments } from '../statistics/moments.ts'
import type { Entry } from './analysis.server.ts'
import type {
  AnalysisView,
  BudgetRow,
  EffectRow,
  FitRow,
  SeriesRow,
  StatedResult,
  SubsetRow,
} from './analysis-view.ts'
import { budgetLineWords } from './budget-words.ts'
import { type Fit, fitWords, lines, methods } from './fits.ts'
import type { StoredReading } from './run-readings.server.ts'

/** One reading as the table of the series shows it. */
export function seriesRow(
  { reading }: StoredReading,
  {
    entries,
    leftOut,
    diagnosis,
  }: { entries: readonly Entry[]; leftOut: Map<string, string>; diagnosis: Diagnosis | null },
): SeriesRow {
  const index = entries.findIndex(({ stored }) => stored.reading.id === reading.id)
  const entry = entries[index]
  return {
    id: reading.id,
    number: reading.number,
    polarity: reading.polarity === -1 ? -1 : 1,
    voltage: { value: reading.anodeVolts, standardUncertainty: entry?.point.uVoltage ?? reading.uAnodeVolts },
    current: { value: reading.coilAmps, standardUncertainty: entry?.point.uCurrent ?? reading.uCoilAmps },
    diameter: entry
      ? { value: entry.point.diameterMetres, standardUncertainty: entry.point.uDiameter }
      : null,
    chargeToMass: entry
      ? { value: entry.result.value, standardUncertainty: entry.result.standardUncertainty }
      : null,
    residual: (entry && diagnosis?.general.residuals[index]) ?? null,
    leverage: (entry && diagnosis?.general.leverages[index]) ?? null,
    isFlagged: diagnosis?.outliers.some((outlier) => outlier.index === index) ?? false,
    leftOut: leftOut.get(reading.id) ?? null,
  }
}

export function meanOf(values: readonly number[]): AnalysisView['mean'] {
  if (values.length === 0) return null
  if (values.length === 1) return { value: values[0] as number, standardDeviation: null, count: 1 }
  const { mean, standardDeviation, count } = moments(values)
  return { value: mean, standardDeviation, count }
}

/** Every line by every method that the readings carry. */
export function fitRows(points: readonly SeriesReading[], field: SeriesField): FitRow[] {
  return lines.flatMap((line) =>
    methods.flatMap((method) => {
      try {
        const { chargeToMass, standardUncertainty, second, fit } = fitSeriesLine(points, field, {
          line,
          method,
        })
        if (!(fit.degreesOfFreedom > 0)) return []
        return [
          {
            fit: `${line}:${method}` as const,
            line,
            method,
            chargeToMass: { value: chargeToMass, standardUncertainty },
            second: second && secondOf(line, second),
            chiSquared: fit.chiSquared,
            degreesOfFreedom: fit.degreesOfFreedom,
            pValue: fit.pValue,
            rSquared: fit.rSquared,
          },
        ]
      } catch (error) {
        if (error instanceof RangeError) return []
        throw error
      }
    }),
  )
}

function secondOf(line: FitRow['line'], { value, standardUncertainty }: Prior): FitRow['second'] {
  return line === 'root'
    ? { name: 'stray field', unit: 'µT', value: value * 1e6, standardUncertainty: standardUncertainty * 1e6 }
    : { name: 'V at zero field', unit: 'V', value, standardUncertainty }
}

/** The result by the fit that the run states; null where that fit gives none. */
export function statedResult(
  fit: Fit,
  {
    diagnosis,
    fits,
    commonRelative,
  }: { diagnosis: Diagnosis; fits: readonly FitRow[]; commonRelative: number; count: number },
): StatedResult | null {
  if (fit === 'general') {
    const { stated } = diagnosis
    return (
      stated && {
        fit,
        words: fitWords[fit],
        value: stated.chargeToMass,
        standardUncertainty: stated.standardUncertainty,
        expandedUncertainty: stated.expandedUncertainty,
        coverageFactor: stated.coverageFactor,
        commonUncertainty: stated.commonUncertainty,
        independentUncertainty: stated.independentUncertainty,
      }
    )
  }
  const row = fits.find((it) => it.fit === fit)
  if (!row) return null
  const { value, standardUncertainty: own } = row.chargeToMass
  const common = commonRelative * value
  const standardUncertainty = Math.hypot(own, common)
  // Only the line's own part rests on few readings, and only where its scale comes from the residuals.
  const freedom =
    row.pValue === null ? row.degreesOfFreedom * (standardUncertainty / own) ** 4 : Number.POSITIVE_INFINITY
  const factor = coverageFactor(freedom)
  return {
    fit,
    words: fitWords[fit],
    value,
    standardUncertainty,
    expandedUncertainty: factor * standardUncertainty,
    coverageFactor: factor,
    commonUncertainty: common,
    independentUncertainty: own,
  }
}

/** The effects in the general model, and what each would be alone. */
export function effectRows({ general, subsets }: Diagnosis): EffectRow[] {
  const none = subsets.find((subset) => subset.effects.length === 0)
  return effects.map((effect) => {
    const alone = subsets.find((subset) => subset.effects.join() === effect)
    const inItsUnit = ({ value, standardUncertainty }: Prior) => ({
      value: inUnit(effect, value),
      standardUncertainty: inUnit(effect, standardUncertainty),
    })
    const size = alone?.sizes[effect]
    return {
      name: effectWords[effect],
      unit: effectUnit(effect),
      ...inItsUnit(general.sizes[effect] as Prior),
      alone:
        none && alone && size
          ? {
              ...inItsUnit(size),
              change: alone.chargeToMass / none.chargeToMass - 1,
              isPlausible: isPlausible(effect, size),
            }
          : null,
    }
  })
}

export function subsetRows({ subsets }: Diagnosis): SubsetRow[] {
  return subsets.map((subset) => ({
    effects: combinationWords(subset.effects),
    chargeToMass: { value: subset.chargeToMass, standardUncertainty: subset.standardUncertainty },
    parameters: subset.effects
      .map((effect: Effect) => sizeWords(effect, subset.sizes[effect] as Prior))
      .join(', '),
    chiSquared: subset.chiSquared,
    degreesOfFreedom: subset.degreesOfFreedom,
    pValue: subset.pValue,
    aicc: subset.aicc,
  }))
}

/**
 * The lines of the budget of the general model. The readings' own parts stand as in a mean of them; what is left of the
 * model's uncertainty is what the readings and the priors leave open of the effects.
 */
export function budgetRows(
  entries: readonly Entry[],
  parts: readonly CommonPart[],
  { general }: Diagnosis,
): BudgetRow[] {
  const own = ownParts(entries)
  const total = general.standardUncertainty / general.chargeToMass
  const open = Math.sqrt(Math.max(0, total ** 2 - own.reduce((sum, { relative }) => sum + relative ** 2, 0)))
  const rows = [
    ...parts.map(({ name, relative }) => ({ name: budgetLineWords(name), isCommon: true, relative })),
    ...own.map(({ name, relative }) => ({ name, isCommon: false, relative })),
    {
      name: 'stray field and offsets, as far as readings and bench leave them open',
      isCommon: false,
      relative: open,
    },
  ].filter(({ relative }) => relative > 0)
  const variance = rows.reduce((sum, { relative }) => sum + relative ** 2, 0)
  return rows.map((row) => ({ ...row, share: row.relative ** 2 / variance }))
}

function ownParts(entries: readonly Entry[]): CommonPart[] {
  const squares = new Map<string, number>()
  for (const { result } of entries)
    for (const { group, contribution, common } of Object.values(result.contributions))
      if (!common) squares.set(group, (squares.get(group) ?? 0) + (contribution / result.value) ** 2)
  return [...squares].map(([group, sum]) => ({
    name: `${group}, as read`,
    relative: Math.sqrt(sum) / entries.length,
  }))
}
