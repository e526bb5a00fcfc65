import { eq } from 'drizzle-orm'
import { RateLimiterMemory, RateLimiterRes } from 'rate-limiter-flexible'
import { Authenticator } from 'remix-auth'
import { FormStrategy } from 'remix-auth-form'
import * as z from 'zod'
import { people } from '../db/schema.ts'
import { siteDatabase } from '../db/site.server.ts'
import { passwordMatches } from './password.server.ts'

/** Five wrong passwords for one account, then a wait. Counted per account: a whole class shares one address. */
const attempts = new RateLimiterMemory({ points: 5, duration: 300, blockDuration: 300 })

export const signInSchema = z.object({
  email: z.string().trim().toLowerCase().min(1, 'Type the e-mail address of your account.'),
  password: z.string().min(1, 'Type your password.'),
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

export const authenticator = new Authenticator<{ id: string }>().use(
  new FormStrategy(async ({ form }) => {
    const parsed = signInSchema.safeParse(Object.fromEntries(form))
    if (!parsed.success) throw new SignInError(400, z.flattenError(parsed.error).fieldErrors)
    const { email, password } = parsed.data

    try {
      await attempts.consume(email)
    } catch (limit) {
      if (!(limit instanceof RateLimiterRes)) throw limit
      const minutes = Math.max(1, Math.ceil(limit.msBeforeNext / 60_000))
      throw new SignInError(429, {
        password: [
          `Too many attempts for this account. Wait ${minutes} minute${minutes === 1 ? '' : 's'}, then try again.`,
        ],
      })
    }

    const db = await siteDatabase()
    const person = await db.query.people.findFirst({ where: eq(people.email, email) })
    const matches = await passwordMatches(person?.passwordHash, password)
    if (!person || !matches || person.disabledAt)
      throw new SignInError(400, { password: ['This address and password do not go together.'] })
    await attempts.delete(email)
    return { id: person.id }
  }),
  'form',
)
