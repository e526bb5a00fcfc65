import { and, asc, eq, exists, isNull, or, type SQL, sql } from 'drizzle-orm'
import { data } from 'react-router'
import { may } from '../auth/capabilities.ts'
import type { Person } from '../context.ts'
import type { Database, Transaction } from '../db/client.server.ts'
import { benches, benchRevisions, classBenches, classMembers, people } from '../db/schema.ts'
import type { CommissionedBench } from '../protocol/bench-config.ts'
import type { Role } from '../safety/types.ts'

export type Watcher = Pick<Person, 'id' | 'role'>
export type VisibleBench = { id: string; name: string; place: string; config: CommissionedBench }

/** The condition on `benches` that leaves the ones that a person may watch: all, or those of their classes, or none. */
export function visibleTo(db: Database | Transaction, person: Watcher): SQL | undefined {
  if (may(person.role, 'watch-all-benches')) return undefined
  if (!may(person.role, 'watch-class-benches')) return sql`false`
  return exists(
    db
      .select({ one: sql`1` })
      .from(classBenches)
      .innerJoin(classMembers, eq(classMembers.classId, classBenches.classId))
      .where(and(eq(classBenches.benchId, benches.id), eq(classMembers.personId, person.id))),
  )
}

/** With ports: the bridge watches these alone. */
export const hasPorts = ({ config }: Pick<VisibleBench, 'config'>): boolean => config.instruments !== null

/** What the frame of a bench's pages needs of it. */
export const toFramed = ({ id, name, place, config }: VisibleBench) => ({
  id,
  name,
  place,
  hasPorts: hasPorts({ config }),
})

const isNewest = sql`${benchRevisions.revision} = (select max(newest.revision) from bench_revisions newest where newest.bench_id = ${benches.id})`

/** The commissioned benches that a person may watch, by name, each with its newest revision. */
export function listVisibleBenches(db: Database, person: Watcher): Promise<VisibleBench[]> {
  return select(db, visibleTo(db, person))
}

/** One bench with its newest revision; throws a 404 when there is none, or none that this person may watch. */
export async function requireVisibleBench(
  db: Database,
  { benchId, person }: { benchId: string; person: Watcher },
): Promise<VisibleBench> {
  const [bench] = await select(db, and(eq(benches.id, benchId), visibleTo(db, person)))
  if (!bench) throw data('There is no such bench, or it is not one of yours.', { status: 404 })
  return bench
}

function select(db: Database, condition: SQL | undefined): Promise<VisibleBench[]> {
  return db
    .select({ id: benches.id, name: benches.name, place: benches.place, config: benchRevisions.config })
    .from(benches)
    .innerJoin(benchRevisions, and(eq(benchRevisions.benchId, benches.id), isNewest))
    .where(condition)
    .orderBy(asc(benches.name), asc(benches.id))
}

/** Everyone who may watch a bench and has an account in force, by name: staff, and the members of its classes. */
export function listWatchers(
  db: Database,
  benchId: string,
): Promise<{ id: string; name: string; role: Exclude<Role, 'guest'> }[]> {
  const isMember = exists(
    db
      .select({ one: sql`1` })
      .from(classMembers)
      .innerJoin(classBenches, eq(classBenches.classId, classMembers.classId))
      .where(and(eq(classMembers.personId, people.id), eq(classBenches.benchId, benchId))),
  )
  const watchesAll = (['technician', 'instructor', 'student'] as const).filter((role) =>
    may(role, 'watch-all-benches'),
  )
  return db
    .select({ id: people.id, name: people.name, role: people.role })
    .from(people)
    .where(and(isNull(people.disabledAt), or(isMember, ...watchesAll.map((role) => eq(people.role, role)))))
    .orderBy(asc(people.name))
}
