import { Outlet } from 'react-router'
import { signedIn } from '../auth/guards.server.ts'
import type { Route } from './+types/signed-in'

export const middleware: Route.MiddlewareFunction[] = [signedIn]

// Without a loader the guard would not run on a navigation that needs no other data from the server.
export const loader = () => null

export default function SignedIn() {
  return <Outlet />
}
