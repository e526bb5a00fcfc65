import { createServer } from 'node:http'
import type { AddressInfo } from 'node:net'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import { type SpoolBatch, type SpoolReply, spoolBatchSchema } from '#app/protocol/commands.ts'
import type { BenchEvent } from '#app/protocol/messages.ts'
import { signatureHeaders } from '#app/protocol/signing.ts'
import { sign } from './bridge-signing.ts'

/**
 * A real HTTP server that answers the bridge as the app does: it ignores what it has and confirms up to the first gap, or
 * up to the first number that it has for something else, and says behind which number to go on.
 */
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
    const otherEvent = takeNew(events, batch.events)
    const otherSummary = takeNew(summaries, batch.summaries)
    if (otherEvent !== null) failures.push(`Event ${otherEvent} came with two contents`)
    if (behaviour.mode === 'store-and-drop') {
      request.socket.destroy()
      return
    }
    const reply: SpoolReply = {
      confirmedEvent: otherEvent === null ? upToGap(events) : otherEvent - 1,
      confirmedSummary: otherSummary === null ? upToGap(summaries) : otherSummary - 1,
    }
    if (otherEvent !== null || otherSummary !== null)
      reply.continueAfter = {
        ...(otherEvent !== null && { event: Math.max(...events.keys()) }),
        ...(otherSummary !== null && { summary: Math.max(...summaries.keys()) }),
      }
    response.end(JSON.stringify(reply))
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
/** Keeps what is new up to the first number that is here for something else, and answers with that number. */
function takeNew<Row extends { sequence: number }>(known: Map<number, Row>, rows: Row[]): number | null {
  for (const row of rows) {
    const had = known.get(row.sequence)
    if (had && JSON.stringify(had) !== JSON.stringify(row)) return row.sequence
    if (!had) known.set(row.sequence, row)
  }
  return null
}
export type Receiver = Awaited<ReturnType<typeof startReceiver>>
