import { randomInt } from 'node:crypto'
import { desc, eq, sql } from 'drizzle-orm'
import { requireVisibleBench, toFramed, type Watcher } from '../benches/visible-benches.server.ts'
import { type Database, write } from '../db/client.server.ts'
import { relations } from '../db/schema.ts'
import type { CommissionedBench } from '../protocol/bench-config.ts'
import { quantities } from '../relation/quantities.ts'
import { readSymbols } from '../relation/symbols.ts'
import { RandomNumbers } from '../statistics/random.ts'
import { ownValues } from './own-values.ts'
import { listReadings } from './reading-view.server.ts'
import type { RelationReply, RelationView, StoredRelation } from './relation-view.ts'
import { findOpenRun } from './runs.server.ts'

// The parser takes long to load, and only who has or checks a formula needs it.
const loadParser = () => import('../relation/work-out.ts')
const loadCheck = () => import('../relation/check.ts')

/** What the page of a person's own relation shows. Throws a 404 for a bench that this person may not watch. */
export async function loadRelation(
  db: Database,
  { benchId, person }: { benchId: string; person: Watcher },
): Promise<RelationView> {
  const bench = await requireVisibleBench(db, { benchId, person })
  const { config } = bench
  const [stored, run] = await Promise.all([findRelation(db, person.id), findOpenRun(db, benchId)])
  const worked = stored && (await loadParser()).workOutRelation(stored)
  const readings = worked && run ? await listReadings(db, { runId: run.id }) : null
  const coils = coilsOf(config)
  return {
    bench: toFramed(bench),
    isRealBench: config.picturePath === null,
    coils,
    relation: worked && { ...stored, readAs: worked.readAs, isHelmholtz: worked.isHelmholtz },
    values:
      worked &&
      readings &&
      ownValues(readings, { relation: worked, coils, connection: config.coilConnection }),
  }
}

/** The newest relation of a person that held, or null. */
export async function findRelation(db: Database, personId: string): Promise<StoredRelation | null> {
  const [row] = await db
    .select()
    .from(relations)
    .where(eq(relations.personId, personId))
    .orderBy(desc(relations.checkedAt), desc(sql`${relations}.rowid`))
    .limit(1)
  return row ? { text: row.text, symbols: row.symbols, checkedAt: row.checkedAt.toISOString() } : null
}

/**
 * Checks a formula as a person typed it and stores one that holds. Throws a 404 for a bench that this person may not
 * watch.
 */
export async function checkOwnRelation(
  db: Database,
  { benchId, person, form }: { benchId: string; person: Watcher; form: FormData },
): Promise<{ status: 200 | 400; reply: RelationReply }> {
  const bench = await requireVisibleBench(db, { benchId, person })
  const typedSymbols = Object.fromEntries(quantities.map((quantity) => [quantity, textOf(form, quantity)]))
  const text = textOf(form, 'formula')
  const typed = { text, symbols: typedSymbols }
  const { symbols, errors } = readSymbols(typedSymbols)
  if (Object.keys(errors).length > 0) return { status: 400, reply: { typed, errors, check: null } }
  const seed = randomInt(2 ** 32)
  const random = new RandomNumbers(seed)
  const { checkRelation } = await loadCheck()
  const check = checkRelation({ text, symbols, random: () => random.uniform() })
  if (check.holds) {
    const values = { personId: person.id, benchId: bench.id, text, symbols, seed }
    await write(db, (tx) => tx.insert(relations).values(values))
  }
  return { status: check.readAs === null ? 400 : 200, reply: { typed, errors, check } }
}

function textOf(form: FormData, name: string): string {
  const value = form.get(name)
  return typeof value === 'string' ? value : ''
}

/** A formula knows one radius and one number of turns: of a pair that are no twins, the means. */
function coilsOf({ coilPair: { coils, separationMetres } }: CommissionedBench): RelationView['coils'] {
  return {
    turns: (coils[0].turns + coils[1].turns) / 2,
    radiusMetres: (coils[0].radiusMetres + coils[1].radiusMetres) / 2,
    separationMetres,
  }
}
