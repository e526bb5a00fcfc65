import * as z from 'zod'
import { may } from '../auth/capabilities.ts'
import { type Answered, done, fieldErrors, ownCodes, refused } from '../benches/action-reply.ts'
import type { Watcher } from '../benches/visible-benches.server.ts'
import { type Database, write } from '../db/client.server.ts'
import { strikes } from '../db/schema.ts'
import { strikeFormSchema } from './forms.ts'
import { requireVisibleReading } from './visible-reading.server.ts'

/**
 * Strikes a reading with a reason; it stays to be seen. Who captured it may, and staff. Throws a 404 for a reading on
 * another's bench.
 */
export async function strikeReading(
  db: Database,
  request: { benchId: string; readingId: string; person: Watcher; form: FormData },
): Promise<Answered> {
  const reading = await requireVisibleReading(db, request)
  if (reading.personId !== request.person.id && !may(request.person.role, 'strike-any-reading'))
    return {
      status: 403,
      reply: refused({
        code: ownCodes.notPermitted,
        sentence: 'Only the person who captured a reading, an instructor or a technician may strike it.',
      }),
    }
  return storeStrike(db, { reading, personId: request.person.id, form: request.form })
}

/** The strike itself, of a reading that this person may strike. */
export async function storeStrike(
  db: Database,
  { reading, personId, form }: { reading: { id: string; number: number }; personId: string; form: FormData },
): Promise<Answered> {
  const parsed = strikeFormSchema.safeParse(Object.fromEntries(form))
  if (!parsed.success) return { status: 400, reply: fieldErrors(z.flattenError(parsed.error).fieldErrors) }
  const values = {
    readingId: reading.id,
    personId,
    reason: parsed.data.reason,
    struckAt: new Date(),
  }
  const [struck] = await write(db, (tx) =>
    tx.insert(strikes).values(values).onConflictDoNothing().returning({ readingId: strikes.readingId }),
  )
  if (!struck)
    return {
      status: 409,
      reply: refused({ code: ownCodes.struck, sentence: `Reading ${reading.number} is struck already.` }),
    }
  return { status: 200, reply: done(`Reading ${reading.number} is struck.`) }
}
