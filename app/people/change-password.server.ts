import { eq } from 'drizzle-orm'
import { hashPassword, passwordMatches } from '../auth/password.server.ts'
import { endOtherSessions } from '../auth/sessions.server.ts'
import { revokeResumeKeys } from '../bridge-link/bridge-client.server.ts'
import type { Person } from '../context.ts'
import { type Database, write } from '../db/client.server.ts'
import { people } from '../db/schema.ts'
import { sendMail } from '../mail/mail.server.ts'

/**
 * Sets a new password, ends the person's other sessions and tells them by e-mail.
 * Answers false, and changes nothing, when the present password is not the one given.
 */
export async function changePassword(
  db: Database,
  { person, current, next }: { person: Person; current: string; next: string },
): Promise<boolean> {
  const row = await db.query.people.findFirst({
    where: eq(people.id, person.id),
    columns: { passwordHash: true },
  })
  if (!(await passwordMatches(row?.passwordHash, current))) return false
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
  return true
}
