import * as z from 'zod'
import { type Answered, done, fieldErrors, ownCodes, refused } from '../benches/action-reply.ts'
import type { Watcher } from '../benches/visible-benches.server.ts'
import { type Database, write } from '../db/client.server.ts'
import { edges, rungs } from '../db/schema.ts'
import { edgesFormSchema, rungFormSchema } from './forms.ts'
import { requireVisibleReading } from './visible-reading.server.ts'

/**
 * Stores the two edges as this person read them, or the rung that the beam met where the bench has rungs. Whoever may
 * watch the bench may enter theirs; a correction is one more row, and the newest counts: of a person for edges, of all
 * for a rung. Throws a 404 for a reading on another's bench.
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
    const { scale } = reading.config
    const row = { readingId: reading.id, personId: request.person.id, enteredAt: new Date() }
    if (scale.kind === 'rungs') {
      const parsed = rungFormSchema(scale.rungs.map(({ name }) => name)).safeParse(
        Object.fromEntries(request.form),
      )
      if (!parsed.success) return invalid(parsed.error)
      const { rung, halfWidth } = parsed.data
      await tx.insert(rungs).values({ ...row, rung, settingHalfWidthAmps: halfWidth })
      return { status: 200, reply: done(`The rung of reading ${reading.number} is entered.`) }
    }
    const parsed = edgesFormSchema(scale.lengthMetres).safeParse(Object.fromEntries(request.form))
    if (!parsed.success) return invalid(parsed.error)
    await tx.insert(edges).values({ ...row, ...parsed.data })
    return { status: 200, reply: done(`The edges of reading ${reading.number} are entered.`) }
  })
}

function invalid(error: z.ZodError): Answered {
  return { status: 400, reply: fieldErrors(z.flattenError(error).fieldErrors) }
}
