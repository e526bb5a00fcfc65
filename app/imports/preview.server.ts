import { and, desc, eq } from 'drizzle-orm'
import type { FieldFactor } from '../analysis/reading.ts'
import { numberField } from '../benches/number-field.ts'
import { requireVisibleBench, type VisibleBench, type Watcher } from '../benches/visible-benches.server.ts'
import type { Database } from '../db/client.server.ts'
import { imports } from '../db/schema.ts'
import { budgetOf } from '../runs/reading-result.server.ts'
import { noReads } from '../runs/reads.server.ts'
import { type ImportChoice, ownField } from './form.ts'
import { guessColumns } from './guess.ts'
import { importedAs } from './imported-bench.ts'
import type { ImportMapping } from './mapping.ts'
import { type BadRow, type ImportedRow, type ImportTarget, mappingProblems, readRows } from './rows.ts'
import type { SentFile } from './sent-file.server.ts'
import { readTable, type Table } from './table.server.ts'
import { decodeText } from './text.server.ts'
import { storedValues } from './values.ts'

/** A file as it would be imported with what is chosen so far. */
export type LookedAt = {
  file: SentFile
  table: Table
  choice: ImportChoice
  bench: VisibleBench | null
  field: FieldFactor | null
  /** What has still to be chosen; until then nothing can be stored. */
  problems: string[]
  mapping: ImportMapping
  good: ImportedRow[]
  bad: BadRow[]
  /** Runs that this person has imported from the same file before, the newest first. */
  before: { runId: string; at: string }[]
}

/**
 * Reads a file with what is chosen, and guesses the rest. Nothing is stored.
 *
 * @throws ImportRefused for a file that is no table of readings, and a 404 for a bench that this person may not watch
 */
export async function lookAt(
  db: Database,
  { file, choice: asked, person }: { file: SentFile; choice: ImportChoice; person: Watcher },
): Promise<LookedAt> {
  const table = readTable(decodeText(file.bytes), {
    delimiter: asked.delimiter === 'auto' ? null : asked.delimiter,
    decimal: asked.decimal === 'auto' ? null : asked.decimal,
    headingRow: asked.headingRow === 'auto' ? null : asked.headingRow,
  })
  const seen = `${file.digest.slice(0, 8)} ${table.delimiter} ${table.headingRow} ${table.headings.length}`
  const choice = {
    ...asked,
    seen,
    columns: asked.seen === seen ? asked.columns : guessColumns(table.headings),
  }
  const isOwn = choice.bench === ownField
  const bench =
    isOwn || choice.bench === '' ? null : await requireVisibleBench(db, { benchId: choice.bench, person })
  const { field, problem } = isOwn ? readField(choice) : { field: null, problem: null }
  const target = targetOf(bench)
  const rowMapping = { ...choice, decimal: table.decimal }
  const inMapping = mappingProblems(rowMapping, target)
  const read = inMapping.length > 0 ? { good: [], bad: [] } : readRows(table.rows, rowMapping, target)
  const mapping = mappingOf(table, choice)
  const hasField = bench !== null || field !== null
  const checked = hasField ? leaveOrbits(read, { bench, field, mapping }) : read
  return {
    file,
    table,
    choice,
    bench,
    field,
    problems: [...inMapping, ...(problem ? [problem] : []), ...(bench || isOwn ? [] : [chooseBench])],
    mapping,
    ...checked,
    before: await findBefore(db, { digest: file.digest, personId: person.id }),
  }
}

const chooseBench = 'Choose the bench whose data these readings use, or state a field factor of their own.'

function readField({ teslaPerAmp, uTeslaPerAmp }: ImportChoice): {
  field: FieldFactor | null
  problem: string | null
} {
  const factor = numberField('the field factor', 'teslas an ampere')
    .refine((value) => value > 0 && value < 1, { error: 'The field factor has to be between 0 and 1 T/A.' })
    .safeParse(teslaPerAmp)
  const uncertainty = numberField('the uncertainty of the field factor', 'teslas an ampere')
    .refine((value) => value >= 0, { error: 'The uncertainty of the field factor has to be 0 or more.' })
    .safeParse(uTeslaPerAmp)
  const issue = factor.error?.issues[0] ?? uncertainty.error?.issues[0]
  if (factor.data === undefined || uncertainty.data === undefined)
    return { field: null, problem: issue?.message ?? null }
  if (uncertainty.data >= factor.data)
    return { field: null, problem: 'The uncertainty of the field factor has to be less than the factor.' }
  return { field: { teslaPerAmp: factor.data, standardUncertainty: uncertainty.data }, problem: null }
}

function targetOf(bench: VisibleBench | null): ImportTarget {
  if (!bench) return { isReversible: true, rungs: [] }
  const { reversal, scale } = bench.config
  return { isReversible: reversal !== 'not', rungs: scale.kind === 'rungs' ? scale.rungs : [] }
}

function mappingOf({ delimiter, decimal, headingRow, headings }: Table, choice: ImportChoice): ImportMapping {
  const { forAll, statedAs, isOnScale, columns } = choice
  return {
    delimiter,
    decimal,
    headingRow,
    columns: columns.flatMap((column, index) =>
      column ? [{ ...column, index, heading: (headings[index] ?? '').slice(0, 60) }] : [],
    ),
    forAll,
    statedAs,
    isOnScale,
  }
}

type Rows = { good: ImportedRow[]; bad: BadRow[] }

/** Rows whose numbers belong to no orbit are no readings either: mostly a unit is another than it seems. */
function leaveOrbits(
  { good, bad }: Rows,
  { bench, field, mapping }: Pick<LookedAt, 'bench' | 'field' | 'mapping'>,
): Rows {
  const entries = {
    ...noReads,
    config: bench?.config ?? null,
    imported: importedAs({ field, mapping }),
    edgeSpread: null,
  }
  const hasOrbit = (row: ImportedRow) => {
    const { reading, rung, stated } = storedValues(row)
    const stored = { ...reading, ...unstored }
    return (
      budgetOf(stored, { ...entries, stated, rung: rung && { ...rung, personId: '', name: '' } }) !== null
    )
  }
  const without = good.filter((row) => !hasOrbit(row))
  const reasons = [`these values give no orbit of ${bench?.name ?? 'such a field'}: look at the units`]
  return {
    good: good.filter((row) => !without.includes(row)),
    bad: [...bad, ...without.map(({ line, cells }) => ({ line, cells, reasons }))].sort(
      (a, b) => a.line - b.line,
    ),
  }
}

const unstored = {
  id: '',
  runId: '',
  number: 0,
  benchId: null,
  revision: null,
  personId: '',
  capturedAt: new Date(0),
}

async function findBefore(db: Database, { digest, personId }: { digest: string; personId: string }) {
  const rows = await db
    .select({ runId: imports.runId, at: imports.importedAt })
    .from(imports)
    .where(and(eq(imports.digest, digest), eq(imports.personId, personId)))
    .orderBy(desc(imports.importedAt))
    .limit(3)
  return rows.map(({ runId, at }) => ({ runId, at: at.toISOString() }))
}
