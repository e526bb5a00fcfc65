import { eq } from 'drizzle-orm'
import { countAttempt, forgetAttempts } from '../auth/attempts.server.ts'
import { hashPassword, passwordMatches } from '../auth/password.server.ts'
import { endOtherSessions } from '../auth/sessions.server.ts'
import { revokeResumeKeys } from '../bridge-link/bridge-client.server.ts'
import type { Person } from '../context.ts'
import { type Database, write } from '../db/client.server.ts'
import { people } from '../db/schema.ts'
import { sendMail } from '../mail/mail.server.ts'

/**
 * Sets a new password, ends the person's other sessions and tells them by e-mail.
 * Answers with why not, and changes nothing, when the present password is not the one given or was tried too often.
 */
export async function changePassword(
  db: Database,
  { person, current, next }: { person: Person; current: string; next: string },
): Promise<string | null> {
  const row = await db.query.people.findFirst({
    where: eq(people.id, person.id),
    columns: { passwordHash: true },
  })
  // A page left open must not be a place to try passwords at.
  const key = `change ${person.id}`
  const tooMany = await countAttempt(key)
  if (tooMany) return tooMany
  if (!(await passwordMatches(row?.passwordHash, current))) return 'This is not your present password.'
  await forgetAttempts(key)
  const passwordHash = await hashPassword(next)
  await write(db, (tx) => tx.update(people).set({ passwordHash }).where(eq(people.id, person.id)))
  await endOtherSessions(db, person.id, person.sessionId)
  void revokeResumeKeys(person.id)
  // The password has changed whether or not the notice arrives.
  await sendMail({
    to: person.email,
    subject: 'Your Coilside password was changed',
    text: `Hello ${person.name},\n\nthe password of your account was changed just now, and your other sessions were ended.\nIf this was not you, tell the technician at once.\n`,
  }).catch((error: unknown) => console.error('The notice of a changed password was not sent:', error))
  return null
}
