import { readFileSync } from 'node:fs'
import { sql } from 'drizzle-orm'
import type { Person } from '#app/context.ts'
import type { Database } from '#app/db/client.server.ts'
import type { ImportPreview, ImportReply } from '#app/imports/import-view.ts'
import { action } from '#app/routes/runs/import.tsx'
import { outcome } from './class-site.ts'
import { routeArgs, routeContext } from './database.ts'

/** A real class's 24 readings; the file names its source. */
export const classReadings = JSON.parse(
  readFileSync(new URL('../imports/data/class-readings.json', import.meta.url), 'utf8'),
) as {
  voltsV: number[]
  ampsA: number[]
  diameterCm: number[]
  uVolts: number
  uAmps: number
  uDiameterCm: number
  expected: { field_factor_T_per_A: number; mean_em: number; sd_em: number }
}

const { voltsV, ampsA, diameterCm, uVolts, uAmps, uDiameterCm, expected } = classReadings
export const classCsv = [
  'V (V),I (A),d (cm)',
  ...voltsV.map((volts, i) => [volts, ampsA[i], diameterCm[i]].join()),
].join('\n')

export type Fields = Record<string, string | string[]>

/** What the form holds for the class's readings: their own field, taken as exact, and the uncertainties that they state. */
export const classFields: Fields = {
  bench: 'own',
  teslaPerAmp: String(expected.field_factor_T_per_A),
  uTeslaPerAmp: '0',
  allVoltage: String(uVolts),
  allCurrent: String(uAmps),
  allLength: String(uDiameterCm),
}

/** One step of the import's form as a browser sends it. Answers with the run's id once it is stored. */
export async function sendImport(
  db: Database,
  person: Person,
  file: { name: string; text: string | Uint8Array } | null,
  fields: Fields = {},
): Promise<{ status: number; runId: string; reply: ImportReply | null }> {
  const body = new FormData()
  if (file) body.set('file', new File([file.text as BlobPart], file.name))
  for (const [name, value] of Object.entries(fields)) for (const one of [value].flat()) body.append(name, one)
  const request = new Request('http://127.0.0.1:3000/runs/import', { method: 'POST', body })
  const args = routeArgs(request, routeContext(db, person), {}) as never
  const answered = await action(args).catch((error: unknown) => error)
  if (answered instanceof Response)
    return {
      status: answered.status,
      runId: answered.headers.get('Location')?.split('/')[2] ?? '',
      reply: null,
    }
  const { status, body: reply } = await outcome(Promise.resolve(answered))
  return { status, runId: '', reply: reply as ImportReply }
}

/** The step after a look: the file comes along in the form, with what the page shows as chosen. */
export function storeShown(
  db: Database,
  person: Person,
  { content, fileName, choice, shown }: ImportPreview,
  fields: Fields = {},
): ReturnType<typeof sendImport> {
  return sendImport(db, person, null, {
    intent: 'store',
    content,
    fileName,
    shown,
    seen: choice.seen,
    bench: choice.bench,
    teslaPerAmp: choice.teslaPerAmp,
    uTeslaPerAmp: choice.uTeslaPerAmp,
    allVoltage: choice.forAll.voltage,
    allCurrent: choice.forAll.current,
    allLength: choice.forAll.length,
    statedAs: choice.statedAs,
    reads: choice.isOnScale ? 'scale' : 'beam',
    delimiter: choice.delimiter,
    decimal: choice.decimal,
    headingRow: String(choice.headingRow),
    role: choice.columns.map((column) => column?.role ?? ''),
    unit: choice.columns.map((column) => column?.unit ?? ''),
    ...fields,
  })
}

/** Looks at a file and stores what is shown. */
export async function importFile(
  db: Database,
  person: Person,
  file: { name: string; text: string },
  fields: Fields = {},
): ReturnType<typeof sendImport> {
  const looked = await sendImport(db, person, file, fields)
  return looked.reply?.preview ? storeShown(db, person, looked.reply.preview) : looked
}

/** Imports the class's readings as a run of this person's. */
export async function importClass(db: Database, person: Person): Promise<string> {
  const { status, runId } = await importFile(
    db,
    person,
    { name: 'measurements.csv', text: classCsv },
    classFields,
  )
  if (status !== 302) throw new Error(`The import was answered with ${status}`)
  return runId
}

/** Leaves no run behind. */
export async function clearRuns(db: Database): Promise<void> {
  for (const table of ['edges', 'strikes', 'rungs', 'stated_diameters', 'readings', 'imports', 'runs'])
    await db.run(sql.raw(`delete from ${table}`))
}
