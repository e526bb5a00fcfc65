import { href, redirect } from 'react-router'
import { endSession, getPerson } from '../../auth/sessions.server.ts'
import { revokeResumeKeys } from '../../bridge-link/bridge-client.server.ts'
import { databaseContext } from '../../context.ts'
import type { Route } from './+types/sign-out'

export const loader = () => redirect(href('/sign-in'))

export async function action({ request, context }: Route.ActionArgs) {
  const person = await getPerson(context.get(databaseContext), request)
  // Pages left open may not go on watching. Signing out does not wait for a bridge that is down.
  if (person) void revokeResumeKeys(person.id)
  return redirect(href('/sign-in'), { headers: { 'Set-Cookie': await endSession(request) } })
}
