import { data, type MiddlewareFunction, redirect } from 'react-router'
import { databaseContext, personContext } from '../context.ts'
import { type Capability, may } from './capabilities.ts'
import { isRead } from './same-origin.server.ts'
import { getPerson } from './sessions.server.ts'

/** Lets only people with a session through, and names them in the context. Others go to the sign-in page, or get 401. */
export const signedIn: MiddlewareFunction<Response> = async ({ request, context }, next) => {
  const person = await getPerson(context.get(databaseContext), request)
  if (!person) {
    const url = new URL(request.url)
    if (!isRead(request) || url.pathname.startsWith('/api/'))
      throw data('Sign in first: the session has ended or there was none.', { status: 401 })
    // The framework's own word in a request for one route's data.
    url.searchParams.delete('_routes')
    const returnTo = url.pathname.replace(/\.data$/, '').replace(/\/_root$/, '/') + url.search
    throw redirect(`/sign-in?${new URLSearchParams({ returnTo })}`)
  }
  context.set(personContext, person)
  return next()
}

/** Lets only roles with the capability through. Stands below `signedIn`. */
export function requireCapability(capability: Capability): MiddlewareFunction<Response> {
  return ({ context }, next) => {
    if (!may(context.get(personContext).role, capability))
      throw data('Your role does not allow this.', { status: 403 })
    return next()
  }
}
