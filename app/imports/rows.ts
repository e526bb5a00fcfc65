import { type CellNumber, readCell, shorten } from './cell.ts'
import { type ColumnMapping, type Role, roleWords, type StatedAs, statements, unitsOf } from './mapping.ts'

/** In the base unit. Without a stated uncertainty the last digit tells how well it is known. */
export type Stated = { value: number; standardUncertainty: number | null; lastDigit: number }

export type ImportedWidth =
  | { kind: 'diameter'; diameter: Stated; edges: { leftMetres: number; rightMetres: number } | null }
  | { kind: 'rung'; rung: string; settingHalfWidthAmps: number | null }

export type ImportedRow = {
  line: number
  /** As they stand in the file, not at any length. */
  cells: string[]
  voltage: Stated
  current: Stated
  width: ImportedWidth
}
export type BadRow = { line: number; cells: string[]; reasons: string[] }

/** What of the bench decides whether a row can be of it. */
export type ImportTarget = {
  isReversible: boolean
  rungs: { name: string; distanceMetres: number }[]
}

export type RowMapping = {
  decimal: '.' | ','
  columns: readonly (ColumnMapping | null)[]
  forAll: { voltage: string; current: string; length: string }
  statedAs: StatedAs
}

const lengths = ['diameter', 'radius', 'left', 'right'] as const

/** What is missing in a mapping, in sentences; with any of these no row can be read. */
export function mappingProblems({ columns }: RowMapping, { rungs }: ImportTarget): string[] {
  const has = (role: Role) => columns.some((column) => column?.role === role)
  const problems = (['voltage', 'current'] as const)
    .filter((role) => !has(role))
    .map((role) => `Say which column holds the ${roleWords[role]}.`)
  const ways = [has('diameter'), has('radius'), has('left') || has('right'), has('rung')].filter(Boolean)
  if (ways.length !== 1)
    problems.push(
      'Say which column holds the diameter: as it is, as a radius, as two edges, or as a rung, in one of these ways.',
    )
  if (has('left') !== has('right')) problems.push('Both edges need a column each.')
  if (has('rung') && rungs.length === 0) problems.push('Rungs need a bench that has rungs: choose it.')
  const twice = columns.find(
    (column, i) => column && columns.findIndex((other) => other?.role === column.role) !== i,
  )
  if (twice) problems.push(`Two columns hold the ${roleWords[twice.role]}: leave one out.`)
  return problems
}

/**
 * Every row as a reading, or with the reasons why it is none: a cell that is not a number, a value out of its domain, a
 * column without a unit. The mapping has no problems.
 */
export function readRows(
  rows: readonly { line: number; cells: string[] }[],
  mapping: RowMapping,
  target: ImportTarget,
): { good: ImportedRow[]; bad: BadRow[] } {
  const good: ImportedRow[] = []
  const bad: BadRow[] = []
  for (const row of rows) {
    const reasons: string[] = []
    const read = readRow(new Row(row.cells, mapping, reasons), mapping, target)
    const named = { line: row.line, cells: row.cells.map(shorten) }
    if (reasons.length === 0 && read) good.push({ ...named, ...read })
    else bad.push({ ...named, reasons })
  }
  return { good, bad }
}

/** One row's cells by what they hold. What is wrong with them is gathered, all of it at once. */
class Row {
  constructor(
    private readonly cells: readonly string[],
    private readonly mapping: RowMapping,
    readonly reasons: string[],
  ) {}

  column(role: Role): { text: string; unit: string } | null {
    const index = this.mapping.columns.findIndex((column) => column?.role === role)
    if (index < 0) return null
    return { text: this.cells[index] ?? '', unit: this.mapping.columns[index]?.unit ?? '' }
  }

  number(role: Role, isIn: (value: number) => boolean, domain: string): CellNumber | null {
    const column = this.column(role)
    if (!column) return null
    const units = unitsOf[role]
    if (column.unit === '') return this.fail(role, 'has no unit: choose it')
    const read = readCell(column.text, { decimal: this.mapping.decimal, unit: column.unit, units })
    if (typeof read === 'string') return this.fail(role, read)
    if (!isIn(read.value)) return this.fail(role, `“${shorten(column.text)}” has to be ${domain}`)
    return read
  }

  /** A number with its uncertainty: out of its column, or the one for all rows in the unit of its own. */
  stated(role: Role, uRole: Role, forAll: string, isIn: (value: number) => boolean, domain: string) {
    const read = this.number(role, isIn, domain)
    const hasColumn = this.column(uRole) !== null
    const u = hasColumn ? this.number(uRole, isPositive, 'above 0') : this.common(role, uRole, forAll)
    if (!read) return null
    const { divisor } = statements[this.mapping.statedAs]
    return { ...read, standardUncertainty: u ? u.value / divisor : null }
  }

  /** In metres, or null for what is no number: then it may be a name. */
  distance(text: string, unit: string): number | null {
    const read = readCell(text, { decimal: this.mapping.decimal, unit, units: unitsOf.rung })
    return typeof read === 'string' ? null : read.value
  }

  fail(role: Role, what: string): null {
    this.reasons.push(`${roleWords[role]}: ${what}`)
    return null
  }

  private common(role: Role, uRole: Role, text: string): CellNumber | null {
    const unit = this.column(role)?.unit ?? ''
    if (text.trim() === '' || unit === '') return null
    const read = readCell(text, { decimal: text.includes(',') ? ',' : '.', unit, units: unitsOf[role] })
    if (typeof read === 'string') return this.fail(uRole, read)
    return read.value > 0 ? read : this.fail(uRole, 'has to be above 0; leave it empty where none is known')
  }
}

const isPositive = (value: number) => value > 0

function readRow(
  row: Row,
  { forAll }: RowMapping,
  target: ImportTarget,
): Omit<ImportedRow, 'line' | 'cells'> | null {
  const voltage = row.stated('voltage', 'uVoltage', forAll.voltage, isPositive, 'above 0')
  const current = row.stated(
    'current',
    'uCurrent',
    forAll.current,
    (amps) => (target.isReversible ? amps !== 0 : amps > 0),
    target.isReversible ? 'other than 0' : 'above 0: this bench has one sense of the current',
  )
  const width = row.column('rung') ? readRung(row, target) : readDiameter(row, forAll.length)
  return voltage && current && width ? { voltage, current, width } : null
}

function readDiameter(row: Row, forAll: string): ImportedWidth | null {
  const of = (role: (typeof lengths)[number], isIn = isPositive, domain = 'above 0') =>
    row.stated(role, 'uLength', forAll, isIn, domain)
  if (row.column('diameter')) {
    const diameter = of('diameter')
    return diameter && { kind: 'diameter', diameter, edges: null }
  }
  if (row.column('radius')) {
    const radius = of('radius')
    return radius && { kind: 'diameter', diameter: times(radius, 2), edges: null }
  }
  const left = of('left', Number.isFinite, 'a number')
  const right = of('right', Number.isFinite, 'a number')
  if (!left || !right) return null
  if (!(right.value > left.value)) return row.fail('right', 'has to stand to the right of the left edge')
  const [l, r] = [left.standardUncertainty, right.standardUncertainty]
  return {
    kind: 'diameter',
    diameter: {
      value: right.value - left.value,
      standardUncertainty: l === null || r === null ? null : Math.hypot(l, r),
      lastDigit: Math.hypot(left.lastDigit, right.lastDigit),
    },
    edges: { leftMetres: left.value, rightMetres: right.value },
  }
}

const times = ({ value, standardUncertainty: u, lastDigit }: Stated, factor: number): Stated => ({
  value: value * factor,
  standardUncertainty: u === null ? null : u * factor,
  lastDigit: lastDigit * factor,
})

/** A rung by its name, or by its distance where the column has a unit. */
function readRung(row: Row, { rungs }: ImportTarget): ImportedWidth | null {
  const { text, unit } = row.column('rung') ?? { text: '', unit: '' }
  const isNamed = ({ name }: { name: string }) => name.toLowerCase() === text.trim().toLowerCase()
  const distance = unit === '' ? null : row.distance(text, unit)
  const found =
    rungs.find(isNamed) ??
    rungs.find(({ distanceMetres }) => distance !== null && Math.abs(distanceMetres - distance) < 1e-6)
  const halfWidth = row.column('halfWidth') ? row.number('halfWidth', (amps) => amps >= 0, '0 or more') : null
  if (!found)
    return row.fail('rung', `“${shorten(text)}” is none of ${rungs.map(({ name }) => name).join(', ')}`)
  return { kind: 'rung', rung: found.name, settingHalfWidthAmps: halfWidth?.value ?? null }
}
