import { createServer, type Server, type Socket } from 'node:net'
import * as z from 'zod'
import type { InstrumentName } from './bench.ts'
import type { Room } from './link-socket.ts'
import type { SerialLine } from './serial-line.ts'
import { answerAsk, askSchema } from './test-asks.ts'

type Reply = { id: unknown; ok: true; answer: unknown } | { id: unknown; ok: false; reason: string }

/** The socket of tests and drills: one JSON ask a line, one JSON answer a line. */
export function createTestServer(room: Room, sockets: Set<Socket>): Server {
  return createServer((socket) => {
    sockets.add(socket)
    socket.setEncoding('utf8')
    socket.setNoDelay(true)
    socket.on('error', () => socket.destroy())
    socket.on('close', () => sockets.delete(socket))
    let input = ''
    socket.on('data', (text: string) => {
      input += text
      for (let end = input.indexOf('\n'); end !== -1; end = input.indexOf('\n')) {
        const line = input.slice(0, end)
        input = input.slice(end + 1)
        if (line.trim() !== '') socket.write(`${JSON.stringify(replyTo(room, line))}\n`)
      }
    })
  })
}

/** The reply to one line of JSON; a line that cannot be understood gets a reason. */
export function replyTo(room: Room, line: string): Reply {
  let raw: unknown
  try {
    raw = JSON.parse(line)
  } catch {
    return { id: null, ok: false, reason: 'The ask is not JSON.' }
  }
  const id = typeof raw === 'object' && raw !== null && 'id' in raw ? raw.id : null
  const parsed = askSchema.safeParse(raw)
  if (!parsed.success) return { id, ok: false, reason: z.prettifyError(parsed.error) }
  const ask = parsed.data
  const bench = room.bench(ask.bench)
  if (!bench) return { id, ok: false, reason: `There is no bench ${ask.bench}.` }
  const lineOf = (instrument: InstrumentName) => room.line(ask.bench, instrument) as SerialLine
  return { id, ok: true, answer: answerAsk(ask, bench, lineOf) }
}
