import { eq } from 'drizzle-orm'
import type { Person } from '#app/context.ts'
import type { Database } from '#app/db/client.server.ts'
import { classes, classMembers, people } from '#app/db/schema.ts'
import { seedDemo } from '#app/db/seed.server.ts'
import { siteDatabase } from '#app/db/site.server.ts'

export type ClassSite = {
  db: Database
  student: Person
  partner: Person
  instructor: Person
  technician: Person
  /** A student of a class that has no bench. */
  outsider: Person
}

/** The demo site in the database of the environment, with one more student who is of another class. */
export async function openClassSite(): Promise<ClassSite> {
  const db = await siteDatabase()
  if ((await seedDemo(db)) === 'seeded') {
    const [outsider] = await db
      .insert(people)
      .values({ name: 'Ode Marsh', email: 'outsider@lab.test', role: 'student', passwordHash: 'none' })
      .returning({ id: people.id })
    const [other] = await db
      .insert(classes)
      .values({ name: 'Practical, group B' })
      .returning({ id: classes.id })
    if (!outsider || !other) throw new Error('The other class was not stored')
    await db.insert(classMembers).values({ classId: other.id, personId: outsider.id })
  }
  const named = async (email: string): Promise<Person> => {
    const row = await db.query.people.findFirst({ where: eq(people.email, email) })
    if (!row) throw new Error(`${email} is not stored`)
    const { id, name, role, roomLight } = row
    return { id, name, email, role, roomLight, sessionId: 'none' }
  }
  return {
    db,
    student: await named('student@lab.test'),
    partner: await named('partner@lab.test'),
    instructor: await named('instructor@lab.test'),
    technician: await named('technician@lab.test'),
    outsider: await named('outsider@lab.test'),
  }
}

/** The status and body of what an action returned or threw. */
export function outcomeOf(result: unknown): { status: number; body: unknown } {
  if (result instanceof Response) return { status: result.status, body: null }
  if (typeof result === 'object' && result !== null && 'init' in result && 'data' in result) {
    const { init, data } = result as { init: { status?: number } | null; data: unknown }
    return { status: init?.status ?? 200, body: data }
  }
  return { status: 200, body: result }
}

/** As `outcomeOf`, for what may be thrown as well. */
export const outcome = (result: Promise<unknown>) => result.then(outcomeOf, outcomeOf)
