import { requireFinite, requirePositive } from '#app/statistics/domain.ts'

const MINUS = '\u2212'
const SUPERSCRIPTS = '⁰¹²³⁴⁵⁶⁷⁸⁹'

type Scaled = { exponent?: number }

/**
 * A value with its standard uncertainty in parentheses, in units of the last digit shown: 1.749(19).
 *
 * The uncertainty is rounded to two digits and the value to the same place, both half away from zero on
 * their shortest decimal form.
 *
 * @param options.exponent the number is shown as a multiple of ten to this power, which is not written
 * @throws RangeError naming `value`, `standardUncertainty` (must be above 0) or `exponent`
 */
export function formatConcise(value: number, standardUncertainty: number, options: Scaled = {}): string {
  requirePositive('standardUncertainty', standardUncertainty)
  const { shown, uncertainty, place } = roundTogether(value, standardUncertainty, options.exponent ?? 0)
  // At or above the units the uncertainty is written out, so that 1230(560) is not mistaken.
  return `${shown}(${place >= 0 ? uncertainty : uncertainty.replace('.', '').replace(/^0+/, '')})`
}

/**
 * A value with its expanded uncertainty: 1.749 ± 0.040. Rounded as in `formatConcise`.
 *
 * @throws RangeError naming `value`, `expandedUncertainty` (must be above 0) or `exponent`
 */
export function formatExpanded(value: number, expandedUncertainty: number, options: Scaled = {}): string {
  requirePositive('expandedUncertainty', expandedUncertainty)
  const { shown, uncertainty } = roundTogether(value, expandedUncertainty, options.exponent ?? 0)
  return `${shown} ± ${uncertainty}`
}

/**
 * A number with a fixed count of decimals, rounded half away from zero on its shortest decimal form, with
 * a proper minus sign; what rounds to zero has no sign.
 *
 * @throws RangeError naming `value` or `decimals` (a whole number from 0 to 20)
 */
export function formatFixed(value: number, decimals: number): string {
  requireFinite('value', value)
  if (!Number.isInteger(decimals) || decimals < 0 || decimals > 20) {
    throw new RangeError(`decimals must be a whole number from 0 to 20, got ${decimals}`)
  }
  return write(roundAt(decompose(value), -decimals))
}

/**
 * A power of ten as text: 10¹¹, or an empty string for 10⁰.
 *
 * @throws RangeError naming `exponent`
 */
export function formatPowerOfTen(exponent: number): string {
  requireExponent(exponent)
  if (exponent === 0) return ''
  const digits = [...String(Math.abs(exponent))].map((digit) => SUPERSCRIPTS[Number(digit)]).join('')
  return `10${exponent < 0 ? '⁻' : ''}${digits}`
}

/**
 * The power of ten of a number's first digit: 11 for 1.749 × 10¹¹, 0 for 0.
 *
 * @throws RangeError naming `value`
 */
export function scientificExponent(value: number): number {
  requireFinite('value', value)
  if (value === 0) return 0
  return Number(value.toExponential().split('e')[1])
}

/** `digits` × 10^`place`, exactly. */
type Decimal = { isNegative: boolean; digits: bigint; place: number }

function decompose(value: number): Decimal {
  const [mantissa = '0', exponent = '0'] = Math.abs(value).toExponential().split('e')
  const [whole = '0', fraction = ''] = mantissa.split('.')
  return {
    isNegative: value < 0,
    digits: BigInt(whole + fraction),
    place: Number(exponent) - fraction.length,
  }
}

function roundAt(decimal: Decimal, place: number): Decimal {
  const { isNegative, digits } = decimal
  const shift = place - decimal.place
  if (shift <= 0) return { isNegative, digits: digits * 10n ** BigInt(-shift), place }
  const unit = 10n ** BigInt(shift)
  return { isNegative, digits: (2n * digits + unit) / (2n * unit), place }
}

function write({ isNegative, digits, place }: Decimal): string {
  const sign = isNegative && digits !== 0n ? MINUS : ''
  if (place >= 0) return sign + String(digits * 10n ** BigInt(place))
  const text = String(digits).padStart(1 - place, '0')
  return `${sign}${text.slice(0, place)}.${text.slice(place)}`
}

function roundTogether(value: number, uncertainty: number, exponent: number) {
  requireFinite('value', value)
  requireExponent(exponent)
  const scaled = (number: number): Decimal => {
    const decimal = decompose(number)
    return { ...decimal, place: decimal.place - exponent }
  }
  const raw = scaled(uncertainty)
  let place = raw.place + String(raw.digits).length - 2
  let rounded = roundAt(raw, place)
  // 0.0996 becomes 0.100 and is then shown with two digits, 0.10.
  if (rounded.digits > 99n) {
    place += 1
    rounded = roundAt(raw, place)
  }
  return { shown: write(roundAt(scaled(value), place)), uncertainty: write(rounded), place }
}

function requireExponent(exponent: number): void {
  if (!Number.isInteger(exponent) || Math.abs(exponent) > 300) {
    throw new RangeError(`exponent must be a whole number from -300 to 300, got ${exponent}`)
  }
}
