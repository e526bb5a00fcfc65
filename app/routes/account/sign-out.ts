import { href, redirect } from 'react-router'
import { endSession } from '../../auth/sessions.server.ts'
import type { Route } from './+types/sign-out'

export const loader = () => redirect(href('/sign-in'))

export async function action({ request }: Route.ActionArgs) {
  return redirect(href('/sign-in'), { headers: { 'Set-Cookie': await endSession(request) } })
}
