import { href, redirect } from 'react-router'
import { requireCapability } from '../../auth/guards.server.ts'
import { answer } from '../../benches/answer.server.ts'
import { makeRoomSafe } from '../../benches/command.server.ts'
import { databaseContext, personContext } from '../../context.ts'
import type { Route } from './+types/make-safe'

export const middleware: Route.MiddlewareFunction[] = [requireCapability('make-room-safe')]

export const loader = () => redirect(href('/hall'))

export async function action({ request, context }: Route.ActionArgs) {
  const answered = await makeRoomSafe(context.get(databaseContext), {
    person: context.get(personContext),
  })
  return answer(request, answered, href('/hall'))
}
