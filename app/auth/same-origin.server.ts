import { data, type MiddlewareFunction } from 'react-router'

export const isRead = ({ method }: Request) => method === 'GET' || method === 'HEAD'

/**
 * Refuses a write that another site's page sent. The framework checks actions of pages, but not of resource routes.
 * The bridge has no Origin and signs its requests instead.
 */
export const sameOrigin: MiddlewareFunction<Response> = ({ request }, next) => {
  const url = new URL(request.url)
  if (isRead(request) || url.pathname.startsWith('/api/bridge/')) return next()
  const origin = request.headers.get('Origin')
  const host = request.headers.get('Host') ?? url.host
  if (origin === null || !URL.canParse(origin) || new URL(origin).host !== host)
    throw data('This was sent from another site and was refused.', { status: 403 })
  return next()
}
