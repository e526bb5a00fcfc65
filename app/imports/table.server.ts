import { CsvError, parse } from 'csv-parse/sync'
import { ImportRefused } from './import-refused.ts'
import { largestColumns, largestRows } from './limits.ts'

export const delimiters = { tab: '\t', semicolon: ';', comma: ',' } as const
export type Delimiter = keyof typeof delimiters

/** What a person may set where the guess is wrong. */
export type TableChoice = {
  delimiter: Delimiter | null
  decimal: '.' | ',' | null
  /** Which row holds the headings, from 1; 0 for none. */
  headingRow: number | null
}

export type Table = {
  delimiter: Delimiter
  decimal: '.' | ','
  headingRow: number
  headings: string[]
  /** Below the headings, with the line of the file that each stands in. */
  rows: { line: number; cells: string[] }[]
}

type Row = Table['rows'][number]

/** Above the readings a file may have some rows of words. */
const mostRowsAbove = 30

/**
 * The rows and columns of a text, with what separates the columns, the decimal mark and the row of headings recognised
 * where they are not given. Empty lines are left out.
 *
 * @throws ImportRefused for a text that is no table, or has too many rows or columns
 */
export function readTable(text: string, choice: TableChoice): Table {
  const delimiter = choice.delimiter ?? guessDelimiter(text)
  const all = split(text, delimiter)
  const columns = Math.max(0, ...all.map(({ cells }) => cells.length))
  if (columns > largestColumns)
    throw new ImportRefused(`This file has ${columns} columns. At most ${largestColumns} can be looked at.`)
  const decimal = choice.decimal ?? guessDecimal(all, delimiter)
  const headingRow = Math.min(choice.headingRow ?? guessHeadingRow(all, decimal), all.length)
  const rows = all.slice(headingRow)
  if (rows.length > largestRows)
    throw new ImportRefused(
      `This file has ${all.length > largestRows + mostRowsAbove ? 'more than ' : ''}${Math.min(rows.length, largestRows + mostRowsAbove)} rows. At most ${largestRows} can be imported at once: send it in parts.`,
    )
  const headings = headingRow > 0 ? (all[headingRow - 1]?.cells ?? []) : []
  const padded = (cells: string[]) => Array.from({ length: columns }, (_, i) => cells[i] ?? '')
  return {
    delimiter,
    decimal,
    headingRow,
    headings: padded(headings),
    rows: rows.map(({ line, cells }) => ({ line, cells: padded(cells) })),
  }
}

function split(text: string, delimiter: Delimiter): Row[] {
  try {
    const records = parse(text, {
      delimiter: delimiters[delimiter],
      relax_column_count: true,
      relax_quotes: true,
      skip_empty_lines: true,
      trim: true,
      info: true,
      to: largestRows + mostRowsAbove + 1,
    }) as unknown as { record: string[]; info: { lines: number } }[]
    return records
      .map(({ record, info }) => ({ line: info.lines, cells: record }))
      .filter(({ cells }) => cells.some((cell) => cell !== ''))
  } catch (error) {
    if (!(error instanceof CsvError)) throw error
    throw new ImportRefused(
      `This file is not a table from line ${error.lines ?? '?'} on: a quotation mark is opened and not closed.`,
    )
  }
}

/** From this part of the rows on that have as many columns as most, a delimiter is taken for the one. */
const evenEnough = 0.8

/** What gives most rows the same number of columns, two at least; the comma last, since it may be the decimal mark. */
function guessDelimiter(text: string): Delimiter {
  const tried = (['tab', 'semicolon', 'comma'] as const).map((delimiter) => ({
    delimiter,
    evenness: evennessOf(text, delimiter),
  }))
  const found =
    tried.find(({ evenness }) => evenness >= evenEnough) ??
    tried.toSorted((a, b) => b.evenness - a.evenness)[0]
  return found && found.evenness > 0 ? found.delimiter : 'comma'
}

function evennessOf(text: string, delimiter: Delimiter): number {
  let counts: number[]
  try {
    counts = split(text, delimiter).map(({ cells }) => cells.length)
  } catch (error) {
    // Quotation marks that another delimiter explains.
    if (error instanceof ImportRefused) return 0
    throw error
  }
  const usual = counts.toSorted((a, b) => a - b)[Math.floor(counts.length / 2)] ?? 0
  return usual < 2 ? 0 : counts.filter((count) => count === usual).length / counts.length
}

function guessDecimal(rows: Row[], delimiter: Delimiter): '.' | ',' {
  if (delimiter === 'comma' && rows.some(({ cells }) => cells.some((cell) => /\d\.\d/.test(cell)))) return '.'
  const cells = rows.flatMap((row) => row.cells)
  const count = (pattern: RegExp) => cells.filter((cell) => pattern.test(cell)).length
  return count(/^[+\-−]?\d*,\d/) > count(/^[+\-−]?\d*\.\d/) ? ',' : '.'
}

/** The last row of words above the first row of numbers. */
function guessHeadingRow(rows: Row[], decimal: '.' | ','): number {
  const number = decimal === ',' ? /^[+\-−]?\d*,?\d/ : /^[+\-−]?\d*\.?\d/
  const first = rows.findIndex(({ cells }) => cells.filter((cell) => number.test(cell)).length >= 2)
  return first === -1 ? Math.min(1, rows.length) : first
}
