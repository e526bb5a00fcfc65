/** Exponents of kilogram, metre, second and ampere. */
export type Dimension = readonly [kilogram: number, metre: number, second: number, ampere: number]

export const dimensionless: Dimension = [0, 0, 0, 0]
export const metre: Dimension = [0, 1, 0, 0]
export const ampere: Dimension = [0, 0, 0, 1]
/** kg m² s⁻³ A⁻¹ */
export const volt: Dimension = [1, 2, -3, -1]
/** Of the magnetic constant, N A⁻² = kg m s⁻² A⁻² */
export const permeability: Dimension = [1, 1, -2, -2]
/** C kg⁻¹ = A s kg⁻¹ */
export const coulombPerKilogram: Dimension = [-1, 0, 1, 1]

/** Of what has another unit's name too. */
const named: [string, Dimension][] = [
  ['V', volt],
  ['N/A²', permeability],
  ['C/kg', coulombPerKilogram],
  ['kg/C', power(coulombPerKilogram, -1)],
  ['T', [1, 0, -2, -1]],
  ['T·m', [1, 1, -2, -1]],
]
const baseUnits = ['kg', 'm', 's', 'A'] as const
const superscripts = '⁰¹²³⁴⁵⁶⁷⁸⁹'
/** Roots of roots leave a last digit behind. */
const tolerance = 1e-9

export function isSame(a: Dimension, b: Dimension): boolean {
  return a.every((exponent, i) => Math.abs(exponent - (b[i] as number)) < tolerance)
}

export function product(a: Dimension, b: Dimension, sign: 1 | -1 = 1): Dimension {
  return [a[0] + sign * b[0], a[1] + sign * b[1], a[2] + sign * b[2], a[3] + sign * b[3]]
}

export function power(base: Dimension, exponent: number): Dimension {
  return [base[0] * exponent, base[1] * exponent, base[2] * exponent, base[3] * exponent]
}

/** The unit of a dimension, as in 'm²' or 'kg·m / (s²·A)'; 'a bare number' where it has none. */
export function unitOf(dimension: Dimension): string {
  if (isSame(dimension, dimensionless)) return 'a bare number'
  const name = named.find(([, known]) => isSame(known, dimension))?.[0]
  if (name) return name
  const above = factors(dimension, 1)
  const below = factors(dimension, -1)
  if (below.length === 0) return above.join('·')
  return `${above.join('·') || '1'}/${below.length > 1 ? `(${below.join('·')})` : below[0]}`
}

function factors(dimension: Dimension, sign: 1 | -1): string[] {
  return baseUnits.flatMap((unit, i) => {
    const exponent = (dimension[i] as number) * sign
    if (exponent < tolerance) return []
    return [Math.abs(exponent - 1) < tolerance ? unit : unit + raised(exponent)]
  })
}

function raised(exponent: number): string {
  const whole = Math.round(exponent)
  if (Math.abs(exponent - whole) < tolerance)
    return [...String(whole)].map((digit) => superscripts[Number(digit)]).join('')
  for (const [divisor, word] of [
    [2, '/2'],
    [3, '/3'],
    [4, '/4'],
    [6, '/6'],
  ] as const) {
    const times = Math.round(exponent * divisor)
    if (Math.abs(exponent * divisor - times) < tolerance) return `^(${times}${word})`
  }
  return `^${Number(exponent.toPrecision(3))}`
}
