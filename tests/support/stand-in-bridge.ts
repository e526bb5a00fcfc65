import { once } from 'node:events'
import { createServer, type IncomingMessage } from 'node:http'
import type { AddressInfo } from 'node:net'
import { createSignatureCheck } from '#bridge/signatures.ts'

export type Asked = { method: string; path: string; body: unknown }
export type Answer = { status?: number; body: unknown } | 'silence'

export type StandInBridge = {
  url: string
  asked: Asked[]
  /** What to answer from now on. */
  answer: (asked: Asked) => Answer | Promise<Answer>
  close: () => Promise<void>
}

/**
 * The far end of the bridge's HTTP alone: a real server that checks each signature as the bridge does and answers what
 * the test says, so that a test can have answers that a real bench gives only in trouble.
 */
export async function startStandInBridge(secret: string): Promise<StandInBridge> {
  const check = createSignatureCheck(secret, 0)
  const server = createServer(async (request, response) => {
    const text = await readText(request)
    const method = request.method ?? ''
    const path = request.url ?? ''
    const signature = check({ method, path, headers: request.headers, body: text }, Date.now() / 1000)
    if (!signature.ok) {
      response.writeHead(401).end(JSON.stringify({ reason: signature.reason }))
      return
    }
    const asked = { method, path, body: JSON.parse(text) as unknown }
    bridge.asked.push(asked)
    const answer = await bridge.answer(asked)
    if (answer === 'silence') return
    response.writeHead(answer.status ?? 200, { 'Content-Type': 'application/json' })
    response.end(typeof answer.body === 'string' ? answer.body : JSON.stringify(answer.body))
  })
  server.listen(0, '127.0.0.1')
  await once(server, 'listening')
  const bridge: StandInBridge = {
    url: `http://127.0.0.1:${(server.address() as AddressInfo).port}`,
    asked: [],
    answer: () => ({ status: 404, body: { reason: 'There is no such bench.' } }),
    async close() {
      server.closeAllConnections()
      server.close()
      await once(server, 'close')
    },
  }
  return bridge
}

async function readText(request: IncomingMessage): Promise<string> {
  request.setEncoding('utf8')
  let text = ''
  for await (const part of request) text += part
  return text
}
