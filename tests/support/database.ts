import { mkdtempSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { RouterContextProvider } from 'react-router'
import { databaseContext, type Person, personContext } from '#app/context.ts'
import type { Database } from '#app/db/client.server.ts'

/** A database file of this test file's own, set in the environment before anything reads it. */
export function ownDatabaseUrl(): string {
  return `file:${join(mkdtempSync(join(tmpdir(), 'coilside-')), 'test.db')}`
}

/** The context that the root middleware, and the guard when a person is given, would have filled. */
export function routeContext(db: Database, person?: Person): RouterContextProvider {
  const context = new RouterContextProvider()
  context.set(databaseContext, db)
  if (person) context.set(personContext, person)
  return context
}

/** What the framework hands a loader or an action, for calling one directly. */
export function routeArgs<Params extends Record<string, string>>(
  request: Request,
  context: RouterContextProvider,
  params: Params,
) {
  return { request, context, params, url: new URL(request.url), pattern: new URL(request.url).pathname }
}

export function formRequest(
  path: string,
  fields: Record<string, string>,
  headers: Record<string, string> = {},
): Request {
  return new Request(`http://127.0.0.1:3000${path}`, {
    method: 'POST',
    body: new URLSearchParams(fields),
    headers,
  })
}
