import { and, asc, eq } from 'drizzle-orm'
import * as z from 'zod'
import { type Answered, done, fieldErrors, ownCodes, refused } from '../benches/action-reply.ts'
import { numberField } from '../benches/number-field.ts'
import { requireVisibleBench, type Watcher } from '../benches/visible-benches.server.ts'
import { type Database, write } from '../db/client.server.ts'
import { plannedSettings } from '../db/schema.ts'
import { requireVisibleRun } from './visible-run.server.ts'

export type PlannedSetting = { id: string; anodeVolts: number; coilAmps: number; polarity: 1 | -1 }

const settingSchema = ({ anodeVolts, coilAmps }: { anodeVolts: number; coilAmps: number }) =>
  z.object({
    anodeVolts: numberField('the anode voltage', 'volts').refine(
      (volts) => volts > 0 && volts <= anodeVolts,
      {
        error: `The anode voltage must be above 0 V and at most the bench's limit of ${anodeVolts} V.`,
      },
    ),
    coilAmps: numberField('the coil current', 'amperes').refine((amps) => amps > 0 && amps <= coilAmps, {
      error: `The coil current must be above 0 A and at most the bench's limit of ${coilAmps} A.`,
    }),
    polarity: z.enum(['1', '-1']).transform((text) => (text === '1' ? 1 : -1)),
  })

/** Settings that a run is still to be read at, in the order in which they were added. */
export async function listPlanned(db: Database, runId: string): Promise<PlannedSetting[]> {
  const rows = await db
    .select()
    .from(plannedSettings)
    .where(eq(plannedSettings.runId, runId))
    .orderBy(asc(plannedSettings.addedAt), asc(plannedSettings.id))
  return rows.map(({ id, anodeVolts, coilAmps, polarity }) => ({
    id,
    anodeVolts,
    coilAmps,
    polarity: polarity === -1 ? -1 : 1,
  }))
}

/**
 * Adds settings to the plan of a run. The form holds `anodeVolts`, `coilAmps` and `polarity` once a setting, in the same
 * order. A setting that is planned already stays once. Throws a 404 for a run that this person may not read.
 */
export async function addPlanned(
  db: Database,
  { runId, person, form }: { runId: string; person: Watcher; form: FormData },
): Promise<Answered> {
  const run = await requireVisibleRun(db, { runId, person })
  if (!run.bench)
    return {
      status: 409,
      reply: refused({
        code: ownCodes.noBench,
        sentence: 'This run was imported without a bench of ours: there is none to plan a setting on.',
      }),
    }
  const { config } = await requireVisibleBench(db, { benchId: run.bench.id, person })
  const columns = ['anodeVolts', 'coilAmps', 'polarity'] as const
  const [volts, amps, polarities] = columns.map((name) => form.getAll(name)) as [
    unknown[],
    unknown[],
    unknown[],
  ]
  const parsed = z
    .array(settingSchema(config.limits))
    .min(1)
    .max(50)
    .safeParse(volts.map((anodeVolts, i) => ({ anodeVolts, coilAmps: amps[i], polarity: polarities[i] })))
  if (!parsed.success)
    return {
      status: 400,
      reply: fieldErrors({ settings: parsed.error.issues.map(({ message }) => message) }),
    }
  await write(db, (tx) =>
    tx
      .insert(plannedSettings)
      .values(parsed.data.map((setting) => ({ ...setting, runId, personId: person.id })))
      .onConflictDoNothing(),
  )
  const count = parsed.data.length
  return {
    status: 200,
    reply: done(
      count === 1 ? 'Added to the plan of this run.' : `${count} settings added to the plan of this run.`,
    ),
  }
}

/** Takes a setting off the plan. Throws a 404 for a run that this person may not read. */
export async function removePlanned(
  db: Database,
  { runId, person, form }: { runId: string; person: Watcher; form: FormData },
): Promise<Answered> {
  await requireVisibleRun(db, { runId, person })
  const id = String(form.get('settingId') ?? '')
  await write(db, (tx) =>
    tx.delete(plannedSettings).where(and(eq(plannedSettings.id, id), eq(plannedSettings.runId, runId))),
  )
  return { status: 200, reply: done('Taken off the plan.') }
}
