import { createServer, type IncomingMessage, type Server, type ServerResponse } from 'node:http'
import * as z from 'zod'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import {
  captureRequestSchema,
  commandRequestSchema,
  configurationSchema,
  makeSafeRequestSchema,
  revocationSchema,
} from '#app/protocol/commands.ts'
import { isStaff } from '#app/safety/controls.ts'
import type { Log } from './log.ts'
import type { Room } from './room.ts'
import { createSignatureCheck } from './signatures.ts'

const largestBodyBytes = 1024 * 1024
/** Who sends slower than this is cut off. */
const timeLimits = { headersTimeout: 5000, requestTimeout: 10_000, connectionsCheckingInterval: 1000 }

type HttpOptions = {
  room: Room
  secret: string
  startedAt: number
  health: () => object
  onConfiguration: (benches: BenchConfig[]) => Promise<void>
  onRevocation: (personId: string) => Promise<void>
  log: Log
}

type Answer = { status: number; body: object }
const answer = (status: number, body: object): Answer => ({ status, body })

/** The bridge's HTTP: signed commands of the app, and an unsigned word on its health. */
export function createHttp(options: HttpOptions): Server {
  const checkSignature = createSignatureCheck(options.secret, options.startedAt)

  async function handle(request: IncomingMessage): Promise<Answer> {
    const path = request.url ?? '/'
    const method = request.method ?? 'GET'
    if (method === 'GET' && path === '/health') return answer(200, options.health())
    const body = await readBody(request)
    if (body === null) return answer(413, { reason: 'The request is too large.' })
    const signed = checkSignature({ method, path, headers: request.headers, body }, Date.now() / 1000)
    if (!signed.ok) return answer(401, { reason: signed.reason })
    return route(method, path, body)
  }

  async function route(method: string, path: string, body: string): Promise<Answer> {
    const [, benchPath, what] = /^\/benches\/([^/?]+)\/(commands|captures)$/.exec(path) ?? []
    if (method === 'POST' && benchPath !== undefined) {
      const bench = options.room.bench(decodeURIComponent(benchPath))
      if (!bench) return answer(404, { reason: 'This bridge has no such bench.' })
      if (what === 'captures') {
        return withBody(captureRequestSchema, body, async ({ actor }) => {
          const taken = bench.capture(actor)
          return answer(200, { accepted: 'capture' in taken, ...taken })
        })
      }
      return withBody(commandRequestSchema, body, async ({ actor, command }) =>
        answer(200, await bench.command(actor, command)),
      )
    }
    switch (`${method} ${path}`) {
      case 'POST /make-safe':
        return withBody(makeSafeRequestSchema, body, async ({ actor }) => {
          if (!isStaff(actor.role)) {
            return answer(403, {
              reason: 'Only an instructor or a technician may make the whole room safe.',
            })
          }
          const benches = await options.room.makeSafe(`${actor.name} asked for make safe in the room.`, actor)
          return answer(200, { benches })
        })
      case 'PUT /configuration':
        return withBody(configurationSchema, body, async ({ benches }) => {
          await options.onConfiguration(benches)
          return answer(200, { benches: benches.map(({ benchId, revision }) => ({ benchId, revision })) })
        })
      case 'POST /revocations':
        return withBody(revocationSchema, body, async ({ personId }) => {
          await options.onRevocation(personId)
          return answer(200, { revoked: personId })
        })
      default:
        return answer(404, { reason: 'There is nothing here.' })
    }
  }

  const server = createServer(timeLimits, (request, response) => {
    handle(request)
      .catch((error: unknown) => {
        if (error instanceof URIError) return answer(400, { reason: 'The path cannot be read.' })
        options.log.error({ error: String(error) }, 'A request failed')
        return answer(500, { reason: 'The bridge failed to answer this.' })
      })
      .then((reply) => send(response, reply))
  })
  // A connection that cannot be accepted (no descriptor left) is no reason to end.
  server.on('error', (error) => options.log.error({ error: String(error) }, 'The HTTP server failed'))
  return server
}

async function withBody<T>(
  schema: z.ZodType<T>,
  body: string,
  work: (parsed: T) => Promise<Answer>,
): Promise<Answer> {
  let raw: unknown
  try {
    raw = JSON.parse(body)
  } catch {
    return answer(400, { reason: 'The body is not JSON.' })
  }
  const parsed = schema.safeParse(raw)
  return parsed.success ? work(parsed.data) : answer(400, { reason: z.prettifyError(parsed.error) })
}

/** The body as text; null when it is too large. */
async function readBody(request: IncomingMessage): Promise<string | null> {
  if (Number(request.headers['content-length'] ?? 0) > largestBodyBytes) return null
  const parts: Buffer[] = []
  let bytes = 0
  for await (const part of request as AsyncIterable<Buffer>) {
    bytes += part.length
    if (bytes > largestBodyBytes) return null
    parts.push(part)
  }
  return Buffer.concat(parts).toString('utf8')
}

function send(response: ServerResponse, { status, body }: Answer): void {
  const text = JSON.stringify(body)
  response.writeHead(status, {
    'content-type': 'application/json',
    'content-length': Buffer.byteLength(text),
    'cache-control': 'no-store',
    ...(status === 413 ? { connection: 'close' } : {}),
  })
  response.end(text)
}
