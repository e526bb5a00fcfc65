import * as z from 'zod'
import { type Answered, done, fieldErrors, ownCodes, refused } from '../benches/action-reply.ts'
import type { Watcher } from '../benches/visible-benches.server.ts'
import { type Database, write } from '../db/client.server.ts'
import { edges } from '../db/schema.ts'
import { edgesFormSchema } from './forms.ts'
import { requireVisibleReading } from './visible-reading.server.ts'

/**
 * Stores the two edges as this person read them. Whoever may watch the bench may enter theirs; a correction is one more
 * row, and the newest of a person counts. Throws a 404 for a reading on another's bench.
 */
export function enterEdges(
  db: Database,
  request: { benchId: string; readingId: string; person: Watcher; form: FormData },
): Promise<Answered> {
  // Looked up where it is written, so that a strike at the same moment comes wholly before or wholly after.
  return write(db, async (tx): Promise<Answered> => {
    const reading = await requireVisibleReading(tx, request)
    if (reading.isStruck)
      return {
        status: 409,
        reply: refused({ code: ownCodes.struck, sentence: 'This reading is struck: capture a new one.' }),
      }
    const schema = edgesFormSchema(reading.config.scale.lengthMetres)
    const parsed = schema.safeParse(Object.fromEntries(request.form))
    if (!parsed.success) return { status: 400, reply: fieldErrors(z.flattenError(parsed.error).fieldErrors) }
    await tx.insert(edges).values({
      readingId: reading.id,
      personId: request.person.id,
      ...parsed.data,
      enteredAt: new Date(),
    })
    return { status: 200, reply: done(`The edges of reading ${reading.number} are entered.`) }
  })
}
