import { randomBytes } from 'node:crypto'
import type { MiddlewareFunction } from 'react-router'
import { nonceContext } from '../context.ts'
import { bridgeSocketUrl } from './socket-url.server.ts'

const isDevelopment = process.env.NODE_ENV === 'development'

/** A Content-Security-Policy with a nonce of its own for each page, and the bridge as the only other origin. */
export const securityHeaders: MiddlewareFunction<Response> = async ({ request, context }, next) => {
  const nonce = randomBytes(16).toString('base64')
  context.set(nonceContext, nonce)
  const response = await next()
  const { headers } = response
  headers.set('X-Content-Type-Options', 'nosniff')
  headers.set('Referrer-Policy', 'same-origin')
  headers.set('X-Frame-Options', 'DENY')
  // What the Back button shows after signing out, on a computer that many share.
  if (!headers.has('Cache-Control')) headers.set('Cache-Control', 'no-store')
  headers.set('Permissions-Policy', 'camera=(), microphone=(), geolocation=()')
  // The development server puts style elements without a nonce and talks to its own socket.
  const style = isDevelopment ? "'unsafe-inline'" : `'nonce-${nonce}'`
  const connect = isDevelopment ? 'ws: http:' : ''
  headers.set(
    'Content-Security-Policy',
    [
      "default-src 'self'",
      `script-src 'self' 'nonce-${nonce}'`,
      `style-src 'self' ${style}`,
      "style-src-attr 'unsafe-inline'",
      "img-src 'self' data: blob:",
      `connect-src 'self' ${new URL(bridgeSocketUrl(request)).origin} ${connect}`,
      "object-src 'none'",
      "frame-ancestors 'none'",
      "base-uri 'self'",
      "form-action 'self'",
    ].join('; '),
  )
  return response
}
