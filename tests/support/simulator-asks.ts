import { once } from 'node:events'
import { connect } from 'node:net'
import { createInterface } from 'node:readline'

/** Asks the simulator over its test socket: what the apparatus truly does, whatever the bridge believes. */
export async function askSimulator<T = unknown>(
  { host, port }: { host: string; port: number },
  ask: string,
  bench: string,
  details: Record<string, unknown> = {},
): Promise<T> {
  const socket = connect(port, host)
  await once(socket, 'connect')
  const lines = createInterface({ input: socket })
  try {
    const answered = once(lines, 'line')
    socket.write(`${JSON.stringify({ id: 1, ask, bench, ...details })}\n`)
    const [line] = (await answered) as [string]
    const reply = JSON.parse(line) as { ok: boolean; answer: T; reason?: string }
    if (!reply.ok) throw new Error(`The simulator refused '${ask}': ${reply.reason}`)
    return reply.answer
  } finally {
    socket.destroy()
  }
}
