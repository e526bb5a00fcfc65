const signs = /[\u2212\u2013]/g
const spaces = /[\s\u00a0\u2009\u202f]+/g
const plain =
  /^(?<mantissa>[+-]?(?:\d+(?:\.(?<decimals>\d*))?|\.(?<fraction>\d+)))(?:e(?<exponent>[+-]?\d+))?/i

/** The power of ten of each unit that a quantity can have. */
export type Units = Record<string, number>
/** In place of a unit: each cell has its own behind the number. */
export const unitInCells = 'cells'

export type CellNumber = { value: number; lastDigit: number }

/**
 * A cell as a number in the base unit, with the size of its last digit. Nothing in it is ever worked out: a formula is text
 * that is not a number.
 *
 * @param options.unit one of `units`, or `unitInCells`; a unit behind the number has to be this one
 * @returns the number, or in words what is wrong with the cell
 */
export function readCell(
  text: string,
  { decimal, unit, units }: { decimal: '.' | ','; unit: string; units: Units },
): CellNumber | string {
  const shown = shorten(text)
  const cell = text.replace(spaces, ' ').trim().replace(signs, '-')
  if (cell === '') return 'is empty'
  const pointed = decimal === ',' ? cell.replace(/\./g, 'x').replace(',', '.') : cell
  const found = plain.exec(pointed)
  if (!found) return `“${shown}” is not a number`
  const { mantissa = '', decimals, fraction, exponent = '0' } = found.groups ?? {}
  const behind = pointed.slice(found[0].length).trim()
  const isUnit = Object.hasOwn(units, behind)
  if (behind !== '' && !isUnit) return `“${shown}” is not a number`
  if (unit === unitInCells && behind === '') return `“${shown}” has no unit`
  if (unit !== unitInCells && behind !== '' && behind !== unit)
    return `“${shown}” is in ${behind}, and the column in ${unit}`
  const power = Number(exponent) + (units[unit === unitInCells ? behind : unit] ?? Number.NaN)
  const value = Number(`${mantissa}e${power}`)
  if (!Number.isFinite(value)) return `“${shown}” is too large`
  return { value, lastDigit: Number(`1e${power - (decimals ?? fraction ?? '').length}`) }
}

const longest = 40

/** A cell as it is shown back: not at any length. */
export const shorten = (text: string) => (text.length > longest ? `${text.slice(0, longest)}…` : text)
