import { type BudgetBench, tabulateEvenness } from '../analysis/reading.ts'
import type { SeriesField } from '../analysis/series-model.ts'

const fields = new WeakMap<BudgetBench, Exclude<SeriesField, { pair: unknown }>>()

/** The field of a bench for a series, in teslas an ampere as measured. It is tabulated once an object. */
export function seriesField(bench: BudgetBench): Exclude<SeriesField, { pair: unknown }> {
  const known = fields.get(bench)
  if (known) return known
  const tables = { 1: tabulateEvenness(bench, 1), [-1]: tabulateEvenness(bench, -1) } as const
  const perCoil = bench.coilConnection === 'parallel' ? 0.5 : 1
  const field = {
    teslaPerAmp: (bench.fieldFactor?.teslaPerAmp ?? tables[1].teslaPerAmp) * perCoil,
    evenness: (radiusMetres: number, polarity: 1 | -1) => {
      const { g, largestRadiusMetres } = tables[polarity]
      return 1 / g.value(Math.min(radiusMetres, largestRadiusMetres)) ** 2
    },
  }
  fields.set(bench, field)
  return field
}
