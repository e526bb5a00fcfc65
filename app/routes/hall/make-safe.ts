import { data, href, redirect } from 'react-router'
import { requireCapability } from '../../auth/guards.server.ts'
import { makeRoomSafe } from '../../benches/command.server.ts'
import { databaseContext, personContext } from '../../context.ts'
import type { Route } from './+types/make-safe'

export const middleware: Route.MiddlewareFunction[] = [requireCapability('make-room-safe')]

export const loader = () => redirect(href('/hall'))

export async function action({ context }: Route.ActionArgs) {
  const { status, reply } = await makeRoomSafe(context.get(databaseContext), {
    person: context.get(personContext),
  })
  return data(reply, { status })
}
