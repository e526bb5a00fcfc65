import { environment } from '../env.server.ts'
import { checkSignature, ReplayMemory } from './signature.server.ts'

const memory = new ReplayMemory()
const largestBody = 8 * 1024 * 1024

/** The body of a request that the bridge has signed; throws a Response of 401 or 413 for any other. */
export async function readSignedBody(request: Request): Promise<string> {
  if (Number(request.headers.get('Content-Length') ?? 0) > largestBody)
    throw Response.json({ reason: 'The batch is too large.' }, { status: 413 })
  const body = await request.text()
  const url = new URL(request.url)
  const reason = checkSignature({
    method: request.method,
    path: url.pathname + url.search,
    body,
    headers: request.headers,
    secret: environment().BRIDGE_SECRET,
    memory,
  })
  if (reason) throw Response.json({ reason }, { status: 401 })
  return body
}
