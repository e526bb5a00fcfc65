import { formatConcise, formatExpanded } from '#app/metrology/format.ts'
import type { Estimate } from '#app/runs/analysis-view.ts'

/** e/m in 10¹¹ C/kg, with its standard uncertainty in parentheses. */
export const inElevens = ({ value, standardUncertainty }: Estimate): string =>
  standardUncertainty > 0
    ? formatConcise(value / 1e11, standardUncertainty / 1e11)
    : (value / 1e11).toFixed(4)

export const expandedInElevens = (value: number, expandedUncertainty: number): string =>
  formatExpanded(value / 1e11, expandedUncertainty / 1e11)

/** A value in its unit with the standard uncertainty in parentheses, the value alone where that is not known. */
export const estimate = ({ value, standardUncertainty }: Estimate): string =>
  standardUncertainty > 0 ? formatConcise(value, standardUncertainty) : String(Number(value.toPrecision(4)))

export const percent = (part: number, digits = 2): string =>
  `${Number((part * 100).toPrecision(digits))}\u2009%`.replace('-', '−')

/** A p value as a reader can use it. */
export function probability(p: number | null): string {
  if (p === null) return '—'
  if (p < 0.0001) return '< 0.0001'
  return p.toFixed(p < 0.01 ? 4 : 2)
}
