import { PassThrough } from 'node:stream'
import { createReadableStreamFromReadable } from '@react-router/node'
import { isbot } from 'isbot'
import { renderToPipeableStream } from 'react-dom/server'
import {
  type EntryContext,
  isRouteErrorResponse,
  type RouterContextProvider,
  ServerRouter,
} from 'react-router'
import { nonceContext } from './context.ts'
import { siteDatabase } from './db/site.server.ts'

export const streamTimeout = 5_000

// Migrates at start, not at the first visit.
await siteDatabase()

export default function handleRequest(
  request: Request,
  status: number,
  headers: Headers,
  routerContext: EntryContext,
  context: RouterContextProvider,
) {
  const nonce = context.get(nonceContext)
  // Without a nonce the middleware has not run: a method that no route takes.
  if (request.method === 'HEAD' || nonce === null) return new Response(null, { status, headers })

  return new Promise<Response>((resolve, reject) => {
    let shellRendered = false
    let statusCode = status
    const ready = isbot(request.headers.get('user-agent')) ? 'onAllReady' : 'onShellReady'
    const { pipe, abort } = renderToPipeableStream(
      <ServerRouter context={routerContext} url={request.url} nonce={nonce} />,
      {
        nonce,
        [ready]() {
          shellRendered = true
          const body = new PassThrough()
          headers.set('Content-Type', 'text/html; charset=utf-8')
          pipe(body)
          resolve(new Response(createReadableStreamFromReadable(body), { headers, status: statusCode }))
        },
        onShellError: reject,
        onError(error: unknown) {
          statusCode = 500
          if (shellRendered) console.error(error)
        },
      },
    )
    setTimeout(abort, streamTimeout + 1_000).unref()
  })
}

/** Logs what went wrong, but neither what a visitor got wrong nor a request that was given up. */
export function handleError(error: unknown, { request }: { request: Request }) {
  if (request.signal.aborted || isRouteErrorResponse(error)) return
  console.error(error)
}
