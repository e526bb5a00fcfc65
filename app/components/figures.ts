/** Stands between a value and its unit. */
export const thinSpace = '\u2009'
const minus = '\u2212'

/** A number with a fixed count of decimals and a true minus sign; a dash where there is none. */
export function fixed(value: number | null | undefined, decimals: number): string {
  if (value === null || value === undefined || !Number.isFinite(value)) return '—'
  const text = Math.abs(value).toFixed(decimals)
  return value < 0 && Number(text) !== 0 ? minus + text : text
}

/** How many decimals show a standard uncertainty with two digits, at least `least`. */
export function decimalsFor(standardUncertainty: number, least = 0): number {
  if (!(standardUncertainty > 0) || !Number.isFinite(standardUncertainty)) return least
  const decimals = 1 - Math.floor(Math.log10(standardUncertainty))
  // 0.0996 rounds up to 0.100, which already has its two digits one place earlier.
  const isRoundedUp = Math.round(standardUncertainty * 10 ** decimals) >= 100
  return Math.max(least, Math.min(12, isRoundedUp ? decimals - 1 : decimals))
}

/** 200.412(61): the value with its standard uncertainty, two digits of it, in the last places of the value. */
export function withUncertainty(value: number, standardUncertainty: number): string {
  if (!(standardUncertainty > 0)) return fixed(value, 3)
  const decimals = decimalsFor(standardUncertainty)
  const digits = (standardUncertainty * 10 ** decimals).toFixed(0)
  return `${fixed(value, decimals)}(${digits})`
}

/** '3 s', '2 min', '1 h 5 min': how long ago. */
export function age(seconds: number): string {
  const whole = Math.max(0, Math.floor(seconds))
  if (whole < 120) return `${whole}${thinSpace}s`
  const minutes = Math.floor(whole / 60)
  if (minutes < 60) return `${minutes}${thinSpace}min`
  return `${Math.floor(minutes / 60)}${thinSpace}h ${minutes % 60}${thinSpace}min`
}
