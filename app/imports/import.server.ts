import { createHash } from 'node:crypto'
import { readForm } from '../auth/request-body.server.ts'
import { listVisibleBenches, type Watcher } from '../benches/visible-benches.server.ts'
import type { Database } from '../db/client.server.ts'
import { type ImportChoice, readChoice } from './form.ts'
import { ImportRefused } from './import-refused.ts'
import type { ImportBench, ImportPreview, ImportReply, PreviewRow } from './import-view.ts'
import { type LookedAt, lookAt } from './preview.server.ts'
import type { ImportedRow } from './rows.ts'
import { readSentFile } from './sent-file.server.ts'
import { storeImport } from './store.server.ts'
import { storedValues, uncertaintyOf } from './values.ts'

/** So many rows are shown; all are counted, and stored. */
const shownRows = 12
const shownBad = 50
const samples = 3

/** The benches whose data a person may import readings for: those that they may watch. */
export async function listImportBenches(db: Database, person: Watcher): Promise<ImportBench[]> {
  const benches = await listVisibleBenches(db, person)
  return benches.map(({ id, name, place, config }) => ({
    id,
    name,
    place,
    scale: config.scale.kind,
    isReversible: config.reversal !== 'not',
  }))
}

/**
 * One step of an import: looks at the file with what is chosen, or with the intent `store` stores its good rows as a run
 * of this person's own, when they were shown as they are. The file comes along each time, so that nothing is kept before it is confirmed. Throws a 404 for
 * a bench that this person may not watch.
 */
export async function importReadings(
  db: Database,
  { person, request }: { person: Watcher; request: Request },
): Promise<{ runId: string } | { status: 200 | 400; reply: ImportReply }> {
  const form = await readForm(request)
  let looked: LookedAt
  try {
    const file = await readSentFile(form)
    looked = await lookAt(db, { file, choice: readChoice(form), person })
  } catch (error) {
    if (!(error instanceof ImportRefused)) throw error
    return { status: 400, reply: { fileErrors: [error.message], preview: null, hasChanged: false } }
  }
  const preview = previewOf(looked)
  if (form.get('intent') !== 'store')
    return { status: 200, reply: { fileErrors: [], preview, hasChanged: false } }
  const hasChanged = form.get('shown') !== preview.shown
  if (hasChanged || looked.problems.length > 0 || looked.good.length === 0)
    return { status: 400, reply: { fileErrors: [], preview, hasChanged } }
  return { runId: await storeImport(db, { looked, personId: person.id }) }
}

function previewOf({ file, table, choice, problems, good, bad, before }: LookedAt): ImportPreview {
  return {
    fileName: file.name,
    bytes: file.bytes.byteLength,
    digest: file.digest,
    content: Buffer.from(file.bytes).toString('base64'),
    choice,
    shown: fingerprint(file.digest, choice),
    delimiter: table.delimiter,
    decimal: table.decimal,
    headingRow: table.headingRow,
    headings: table.headings.map((heading) => heading.slice(0, 60)),
    samples: table.headings.map((_, i) =>
      table.rows.slice(0, samples).map(({ cells }) => cells[i]?.slice(0, 40) ?? ''),
    ),
    problems,
    rows: good.slice(0, shownRows).map(toRow),
    goodCount: good.length,
    bad: bad.slice(0, shownBad),
    badCount: bad.length,
    before,
  }
}

const fingerprint = (digest: string, choice: ImportChoice) =>
  createHash('sha256')
    .update(JSON.stringify([digest, choice]))
    .digest('hex')
    .slice(0, 16)

function toRow(row: ImportedRow): PreviewRow {
  const { rung, stated } = storedValues(row)
  const known = (stated: ImportedRow['voltage']) => ({
    value: stated.value,
    standardUncertainty: uncertaintyOf(stated),
  })
  return {
    line: row.line,
    voltage: known(row.voltage),
    current: known(row.current),
    diameter: stated && { value: stated.diameterMetres, standardUncertainty: stated.uDiameterMetres },
    edges: row.width.kind === 'diameter' ? row.width.edges : null,
    rung,
  }
}
