import { and, eq, gt, isNull, ne } from 'drizzle-orm'
import { createSessionStorage } from 'react-router'
import type { Person } from '../context.ts'
import { type Database, write } from '../db/client.server.ts'
import { people, sessions } from '../db/schema.ts'
import { siteDatabase } from '../db/site.server.ts'
import { environment } from '../env.server.ts'

const sessionDays = 14
const seenAgainMs = 60_000

/** Whether browsers reach this site over HTTPS, so that a cookie may keep to it. */
export const isHttps = () => new URL(environment().SITE_URL).protocol === 'https:'

/** The cookie holds only the row's id, signed; the row says whose it is and whether it still stands. */
function storage() {
  return createSessionStorage<{ personId: string }>({
    cookie: {
      name: 'coilside_session',
      path: '/',
      httpOnly: true,
      sameSite: 'lax',
      secure: isHttps(),
      secrets: [environment().SESSION_SECRET],
      maxAge: sessionDays * 86_400,
    },
    async createData(data) {
      if (!data.personId) throw new Error('A session needs a person')
      const values = {
        personId: data.personId,
        expiresAt: new Date(Date.now() + sessionDays * 86_400_000),
      }
      const [row] = await write(await siteDatabase(), (tx) =>
        tx.insert(sessions).values(values).returning({ id: sessions.id }),
      )
      if (!row) throw new Error('The session was not stored')
      return row.id
    },
    async readData(id) {
      const row = await (await siteDatabase()).query.sessions.findFirst({
        where: and(eq(sessions.id, id), isNull(sessions.revokedAt), gt(sessions.expiresAt, new Date())),
      })
      return row ? { personId: row.personId } : null
    },
    async updateData() {},
    async deleteData(id) {
      await write(await siteDatabase(), (tx) =>
        tx.update(sessions).set({ revokedAt: new Date() }).where(eq(sessions.id, id)),
      )
    },
  })
}

const readSession = (request: Request) => storage().getSession(request.headers.get('Cookie'))

/**
 * Starts a new session for a person and returns its Set-Cookie. The id is always new, and the session that the browser
 * brought, if it did, ends: its cookie is overwritten.
 */
export async function startSession(personId: string, request?: Request): Promise<string> {
  if (request) await endSession(request)
  const session = await storage().getSession()
  session.set('personId', personId)
  return storage().commitSession(session)
}

/** Revokes the request's session, if there is one, and returns the Set-Cookie that forgets it. */
export async function endSession(request: Request): Promise<string> {
  return storage().destroySession(await readSession(request))
}

/** Revokes every session of a person but one. */
export async function endOtherSessions(db: Database, personId: string, sessionId: string): Promise<void> {
  await write(db, (tx) =>
    tx
      .update(sessions)
      .set({ revokedAt: new Date() })
      .where(and(eq(sessions.personId, personId), ne(sessions.id, sessionId), isNull(sessions.revokedAt))),
  )
}

/** The person behind a request, or null. A disabled account has no sessions. */
export async function getPerson(db: Database, request: Request): Promise<Person | null> {
  const session = await readSession(request)
  if (!session.has('personId')) return null
  const [row] = await db
    .select({
      id: people.id,
      name: people.name,
      email: people.email,
      role: people.role,
      roomLight: people.roomLight,
      lastSeenAt: sessions.lastSeenAt,
    })
    .from(sessions)
    .innerJoin(people, eq(people.id, sessions.personId))
    .where(and(eq(sessions.id, session.id), isNull(people.disabledAt)))
  if (!row) return null
  const { lastSeenAt, ...person } = row
  if (Date.now() - lastSeenAt.getTime() > seenAgainMs)
    await write(db, (tx) =>
      tx.update(sessions).set({ lastSeenAt: new Date() }).where(eq(sessions.id, session.id)),
    )
  return { ...person, sessionId: session.id }
}
