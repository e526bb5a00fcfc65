import { data, type MiddlewareFunction } from 'react-router'
import { largestUploadBytes } from '../files/picture-limits.ts'
import { largestImportBody } from '../imports/limits.ts'
import { isRead } from './same-origin.server.ts'

/** A form of this site is some hundred bytes; a batch of the bridge may be long. */
const largestForm = 64 * 1024
const largestBatch = 8 * 1024 * 1024
const importPath = /^\/runs\/import(\.data)?$/
const uploadPath = /^\/benches\/[^/]+\/readings\/[^/]+\/photo(\.data)?$/

/** Refuses a body that is too long, or whose length is not told, before anything reads it. */
export const limitBody: MiddlewareFunction<Response> = ({ request }, next) => {
  if (isRead(request)) return next()
  if (request.headers.has('Transfer-Encoding'))
    throw data('The length of this request is not told.', { status: 411 })
  if (Number(request.headers.get('Content-Length') ?? 0) > largestOf(new URL(request.url).pathname))
    throw data('This request is too large.', { status: 413 })
  return next()
}

function largestOf(path: string): number {
  if (path.startsWith('/api/bridge/')) return largestBatch
  if (importPath.test(path)) return largestImportBody
  return uploadPath.test(path) ? largestUploadBytes : largestForm
}

/** The form that a request carries. Throws a 400 when it carries none. */
export async function readForm(request: Request): Promise<FormData> {
  try {
    return await request.formData()
  } catch {
    throw notAForm()
  }
}

export const notAForm = () => data('This is not a form of this site.', { status: 400 })
