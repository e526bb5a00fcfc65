import { and, eq } from 'drizzle-orm'
import { data } from 'react-router'
import { may } from '../auth/capabilities.ts'
import { type Answered, ownCodes, refused } from '../benches/action-reply.ts'
import type { Watcher } from '../benches/visible-benches.server.ts'
import type { Database } from '../db/client.server.ts'
import { imports, readings } from '../db/schema.ts'
import { listReadings, type ReadingView } from '../runs/reading-view.server.ts'
import { storeStrike } from '../runs/strike.server.ts'
import { requireVisibleRun, type VisibleRun } from '../runs/visible-run.server.ts'

export type ImportedRunView = {
  run: { id: string; by: string; at: string; isMine: boolean }
  bench: VisibleRun['bench']
  file: Pick<
    typeof imports.$inferSelect,
    'fileName' | 'digest' | 'bytes' | 'rowsLeftOut' | 'mapping' | 'field'
  >
  mayStrike: boolean
  readings: ReadingView[]
}

/** An imported run with its file and its readings. Throws a 404 for another's, and for a run that was measured here. */
export async function loadImportedRun(
  db: Database,
  { runId, person }: { runId: string; person: Watcher },
): Promise<ImportedRunView> {
  const run = await requireVisibleRun(db, { runId, person })
  const file = await db.query.imports.findFirst({ where: eq(imports.runId, runId) })
  if (!file) throw data('This run was not imported.', { status: 404 })
  const { fileName, digest, bytes, rowsLeftOut, mapping, field } = file
  const isMine = run.personId === person.id
  return {
    run: { id: run.id, by: run.by, at: run.startedAt.toISOString(), isMine },
    bench: run.bench,
    file: { fileName, digest, bytes, rowsLeftOut, mapping, field },
    mayStrike: isMine || may(person.role, 'strike-any-reading'),
    readings: await listReadings(db, { runId }),
  }
}

/** Strikes a reading of an imported run with a reason: whose run it is may, and staff. Throws a 404 for another's. */
export async function strikeImported(
  db: Database,
  { runId, person, form }: { runId: string; person: Watcher; form: FormData },
): Promise<Answered> {
  const { mayStrike } = await loadImportedRun(db, { runId, person })
  const [reading] = await db
    .select({ id: readings.id, number: readings.number })
    .from(readings)
    .where(and(eq(readings.runId, runId), eq(readings.id, String(form.get('readingId') ?? ''))))
  if (!reading) throw data('There is no such reading in this run.', { status: 404 })
  if (!mayStrike)
    return {
      status: 403,
      reply: refused({
        code: ownCodes.notPermitted,
        sentence: 'Only whose run it is, an instructor or a technician may strike a reading of it.',
      }),
    }
  return storeStrike(db, { reading, personId: person.id, form })
}
