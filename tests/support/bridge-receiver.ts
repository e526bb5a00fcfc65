import { createServer } from 'node:http'
import type { AddressInfo } from 'node:net'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import { type SpoolBatch, spoolBatchSchema } from '#app/protocol/commands.ts'
import type { BenchEvent } from '#app/protocol/messages.ts'
import { signatureHeaders } from '#app/protocol/signing.ts'
import { sign } from './bridge-signing.ts'

/** A real HTTP server that answers the bridge as the app does: it ignores what it has and confirms up to the first gap. */
export async function startReceiver(benches: BenchConfig[], port = 0) {
  const events = new Map<number, BenchEvent>()
  const summaries = new Map<number, SpoolBatch['summaries'][number]>()
  const failures: string[] = []
  /** What becomes of the next batches: stored and confirmed, stored with the answer lost, or not stored at all. */
  const behaviour: { mode: 'confirm' | 'store-and-drop' | 'drop' } = { mode: 'confirm' }
  const upToGap = (numbers: { has(sequence: number): boolean }) => {
    let last = 0
    while (numbers.has(last + 1)) last++
    return last
  }
  const server = createServer(async (request, response) => {
    const parts: Buffer[] = []
    for await (const part of request as AsyncIterable<Buffer>) parts.push(part)
    const body = Buffer.concat(parts).toString()
    const path = request.url ?? ''
    const header = (name: string) => String(request.headers[name] ?? '')
    const wanted = sign(request.method ?? '', path, body, {
      time: header(signatureHeaders.time),
      nonce: header(signatureHeaders.nonce),
    })
    if (wanted[signatureHeaders.signature] !== header(signatureHeaders.signature)) {
      failures.push(`${path} was not signed`)
      response.writeHead(401).end('{}')
      return
    }
    if (path === '/api/bridge/configuration') {
      response.end(JSON.stringify({ benches }))
      return
    }
    if (behaviour.mode === 'drop') {
      request.socket.destroy()
      return
    }
    const batch = spoolBatchSchema.parse(JSON.parse(body))
    for (const event of batch.events) {
      const had = events.get(event.sequence)
      if (had && JSON.stringify(had) !== JSON.stringify(event))
        failures.push(`Event ${event.sequence} came with two contents`)
      if (!had) events.set(event.sequence, event)
    }
    for (const summary of batch.summaries) summaries.set(summary.sequence, summary)
    if (behaviour.mode === 'store-and-drop') {
      request.socket.destroy()
      return
    }
    response.end(JSON.stringify({ confirmedEvent: upToGap(events), confirmedSummary: upToGap(summaries) }))
  })
  await new Promise<void>((resolve) => server.listen(port, '127.0.0.1', resolve))
  return {
    url: `http://127.0.0.1:${(server.address() as AddressInfo).port}`,
    events,
    summaries,
    failures,
    behaviour,
    close: () =>
      new Promise<void>((resolve) => {
        server.close(() => resolve())
        server.closeAllConnections()
      }),
  }
}
export type Receiver = Awaited<ReturnType<typeof startReceiver>>
