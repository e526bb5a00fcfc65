import { parallaxFactor } from './parallax.ts'
import type { BudgetBench, Reading, ReadingResult } from './reading.ts'
import type { SeriesReading } from './series-model.ts'

/** What the readings of a run share: a standard uncertainty of e/m relative to it. */
export type CommonPart = { name: string; relative: number }

/**
 * The voltage, current and diameter of one reading, each with the standard uncertainty that is its own: scatter, the
 * last digit, and how well the edges were read. Accuracy of the meters, the coil pair, parallax and the beam's edge are
 * the same for all readings and stand in `commonParts`.
 *
 * @param result what `readingBudget` gave for the reading
 */
export function seriesReading(
  reading: Reading & { bench: BudgetBench },
  result: ReadingResult,
): SeriesReading {
  const own = (...groups: string[]) =>
    Math.hypot(
      ...Object.values(result.contributions)
        .filter(({ group, common }) => !common && groups.includes(group))
        .map(({ contribution, sensitivity }) =>
          sensitivity === 0 ? 0 : contribution / Math.abs(sensitivity),
        ),
    )
  return {
    voltageVolts: reading.voltageVolts + (reading.bench.anodeMeter.correctionVolts ?? 0),
    currentAmps: Math.abs(reading.currentAmps),
    diameterMetres: result.diameterMetres,
    uVoltage: own('anode voltage'),
    uCurrent: own('coil current'),
    uDiameter: own('edges', 'photo', 'diameter') * parallaxFactor(reading.bench.scale),
    polarity: reading.currentAmps < 0 ? -1 : 1,
  }
}

/**
 * The common lines of the readings' budgets, each relative to e/m: the root mean square over the readings, since
 * one line weighs a little differently in each.
 */
export function commonParts(results: readonly ReadingResult[]): CommonPart[] {
  const squares = new Map<string, number>()
  for (const { value, contributions } of results)
    for (const [name, { contribution, common }] of Object.entries(contributions))
      if (common) squares.set(name, (squares.get(name) ?? 0) + (contribution / value) ** 2)
  return [...squares].map(([name, sum]) => ({ name, relative: Math.sqrt(sum / results.length) }))
}
