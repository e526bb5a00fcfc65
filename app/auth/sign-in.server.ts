import { eq } from 'drizzle-orm'
import { Authenticator } from 'remix-auth'
import { FormStrategy } from 'remix-auth-form'
import * as z from 'zod'
import { people } from '../db/schema.ts'
import { siteDatabase } from '../db/site.server.ts'
import { countAttempt, forgetAttempts } from './attempts.server.ts'
import { isKnownBrowser } from './known-browser.server.ts'
import { passwordMatches } from './password.server.ts'

const signInSchema = z.object({
  email: z
    .string()
    .trim()
    .toLowerCase()
    .min(1, 'Type the e-mail address of your account.')
    // RFC 5321, 4.5.3.1.3: the longest path, less its brackets.
    .max(254, 'This is too long for an e-mail address.'),
  password: z.string().min(1, 'Type your password.').max(1000, 'This is too long for a password.'),
})

/** A sign-in that did not go through, with the fields to mark. */
export class SignInError extends Error {
  readonly status: number
  readonly errors: Record<string, string[]>
  constructor(status: number, errors: Record<string, string[]>) {
    super('The sign-in did not go through')
    this.status = status
    this.errors = errors
  }
}

export const authenticator = new Authenticator<{ id: string; email: string }>().use(
  new FormStrategy(async ({ form, request }) => {
    const parsed = signInSchema.safeParse(Object.fromEntries(form))
    if (!parsed.success) throw new SignInError(400, z.flattenError(parsed.error).fieldErrors)
    const { email, password } = parsed.data

    const key = `${(await isKnownBrowser(request, email)) ? 'known browser' : 'elsewhere'} ${email}`
    const tooMany = await countAttempt(key)
    if (tooMany) throw new SignInError(429, { password: [tooMany] })

    const db = await siteDatabase()
    const person = await db.query.people.findFirst({ where: eq(people.email, email) })
    const matches = await passwordMatches(person?.passwordHash, password)
    if (!person || !matches || person.disabledAt)
      throw new SignInError(400, { password: ['This address and password do not go together.'] })
    await forgetAttempts(key)
    return { id: person.id, email }
  }),
  'form',
)
