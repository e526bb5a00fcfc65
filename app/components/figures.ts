import { formatConcise, formatFixed } from '#app/metrology/format.ts'

/** Stands between a value and its unit. */
export const thinSpace = '\u2009'

/** A number with a fixed count of decimals; a dash where there is none. */
export function fixed(value: number | null | undefined, decimals: number): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return '—'
  return formatFixed(value, decimals)
}

/** 200.412(61): the value with its standard uncertainty; the value alone where the uncertainty is not known. */
export function withUncertainty(value: number, standardUncertainty: number): string {
  return standardUncertainty > 0 ? formatConcise(value, standardUncertainty) : fixed(value, 3)
}

/** 'just now', '3 s ago'. */
export function ago(seconds: number): string {
  return seconds < 1 ? 'just now' : `${age(seconds)} ago`
}

/** '3 s', '2 min', '1 h 5 min': how long ago. */
export function age(seconds: number): string {
  const whole = Math.max(0, Math.floor(seconds))
  if (whole < 120) return `${whole}${thinSpace}s`
  const minutes = Math.floor(whole / 60)
  if (minutes < 60) return `${minutes}${thinSpace}min`
  return `${Math.floor(minutes / 60)}${thinSpace}h ${minutes % 60}${thinSpace}min`
}
