import { eq } from 'drizzle-orm'
import { data, redirect } from 'react-router'
import { localPath } from '../../auth/local-path.ts'
import { readForm } from '../../auth/request-body.server.ts'
import { roomLightCookie, roomLightSchema } from '../../auth/room-light.server.ts'
import { getPerson } from '../../auth/sessions.server.ts'
import { answerAlways } from '../../benches/answer-always.ts'
import { databaseContext } from '../../context.ts'
import { write } from '../../db/client.server.ts'
import { people } from '../../db/schema.ts'
import type { Route } from './+types/room-light'

export const loader = () => redirect('/')

/** Stored with the account, and in a cookie. Without scripts the browser is sent back to where it was. */
export async function action({ request, context }: Route.ActionArgs) {
  const form = await readForm(request)
  const light = roomLightSchema.safeParse(form.get('roomLight'))
  if (!light.success) throw data('The room light is lit or dark.', { status: 400 })
  const roomLight = light.data
  const db = context.get(databaseContext)
  const person = await getPerson(db, request)
  if (person) await write(db, (tx) => tx.update(people).set({ roomLight }).where(eq(people.id, person.id)))
  const headers = { 'Set-Cookie': await roomLightCookie(roomLight) }
  const returnTo = form.get('returnTo')
  return returnTo === null ? data({ roomLight }, { headers }) : redirect(localPath(returnTo), { headers })
}

/** The switch stands on the page of a live bench as well, which must not go because the web application is silent. */
export const clientAction = ({ serverAction }: Route.ClientActionArgs) => answerAlways({ serverAction })
