import { eq } from 'drizzle-orm'
import { data, redirect } from 'react-router'
import { localPath } from '../../auth/local-path.ts'
import { roomLightCookie, roomLightSchema } from '../../auth/room-light.server.ts'
import { getPerson } from '../../auth/sessions.server.ts'
import { databaseContext } from '../../context.ts'
import { people } from '../../db/schema.ts'
import type { Route } from './+types/room-light'

export const loader = () => redirect('/')

/** Stored with the account, and in a cookie. Without scripts the browser is sent back to where it was. */
export async function action({ request, context }: Route.ActionArgs) {
  const form = await request.formData()
  const light = roomLightSchema.safeParse(form.get('roomLight'))
  if (!light.success) throw data('The room light is lit or dark.', { status: 400 })
  const db = context.get(databaseContext)
  const person = await getPerson(db, request)
  if (person) await db.update(people).set({ roomLight: light.data }).where(eq(people.id, person.id))
  const headers = { 'Set-Cookie': await roomLightCookie(light.data) }
  const returnTo = form.get('returnTo')
  return returnTo === null
    ? data({ roomLight: light.data }, { headers })
    : redirect(localPath(returnTo), { headers })
}
