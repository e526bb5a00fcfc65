const written = /^[+-]?(?:\d+(?:[.,](?<decimals>\d*))?|[.,](?<fraction>\d+))(?:e(?<exponent>[+-]?\d+))?$/i

/**
 * Size of the last digit of a number as it is written, with a point or a comma as the decimal mark: 0.1 for '200.4', 1 for
 * '200', 10 for '2.0e2'.
 *
 * @throws RangeError naming `text` where it is not a number
 */
export function lastDigitOf(text: string): number {
  const found = written.exec(text.trim().replace('−', '-'))
  if (!found) throw new RangeError(`text must be a number, got ${text}`)
  const { decimals, fraction, exponent = '0' } = found.groups ?? {}
  return Number(`1e${Number(exponent) - (decimals ?? fraction ?? '').length}`)
}
