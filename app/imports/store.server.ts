import { type Database, write } from '../db/client.server.ts'
import { imports, readings, rungs, runs, statedDiameters } from '../db/schema.ts'
import type { LookedAt } from './preview.server.ts'
import { storedValues } from './values.ts'

/**
 * Stores the good rows of a file as a run of this person's own, all or nothing. It is closed from the start: no reading
 * taken at the bench is added to it. Returns the run's id.
 *
 * @throws RangeError where something is still to be chosen, or no row is good
 */
export function storeImport(
  db: Database,
  { looked, personId, now = new Date() }: { looked: Omit<LookedAt, 'before'>; personId: string; now?: Date },
): Promise<string> {
  const { file, bench, field, mapping, good, bad, problems } = looked
  if (problems.length > 0) throw new RangeError('looked must have no problems')
  if (good.length === 0) throw new RangeError('looked must have good rows')
  const runId = crypto.randomUUID()
  const rows = good.map((row, i) => ({ id: crypto.randomUUID(), number: i + 1, ...storedValues(row) }))
  const of = { runId, benchId: bench?.id ?? null, revision: bench?.config.revision ?? null, personId }
  return write(db, async (tx) => {
    await tx.insert(runs).values({ id: runId, benchId: of.benchId, personId, startedAt: now, endedAt: now })
    await tx.insert(imports).values({
      runId,
      personId,
      importedAt: now,
      fileName: file.name,
      digest: file.digest,
      bytes: file.bytes.byteLength,
      rowsLeftOut: bad.length,
      mapping,
      field,
    })
    await tx
      .insert(readings)
      .values(rows.map(({ id, number, reading }) => ({ ...reading, ...of, id, number, capturedAt: now })))
    const diameters = rows.flatMap(({ id, stated }) => (stated ? [{ readingId: id, ...stated }] : []))
    if (diameters.length > 0) await tx.insert(statedDiameters).values(diameters)
    const met = rows.flatMap(({ id, rung }) =>
      rung ? [{ readingId: id, personId, ...rung, enteredAt: now }] : [],
    )
    if (met.length > 0) await tx.insert(rungs).values(met)
    return runId
  })
}
