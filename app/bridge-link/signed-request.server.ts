import { environment } from '../env.server.ts'
import { checkSignature, ReplayMemory } from './signature.server.ts'

const memory = new ReplayMemory()

/** The body of a request that the bridge has signed; throws a Response of 401 for any other. */
export async function readSignedBody(request: Request): Promise<string> {
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
