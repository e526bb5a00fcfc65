import type { Server, Socket } from 'node:net'
import { type Address, listenAt } from './addresses.ts'
import { type Clock, type InstrumentName, instrumentNames, SimulatedBench } from './bench.ts'
import { createLinkServer } from './link-socket.ts'
import { Random } from './model/random.ts'
import type { Scenario } from './scenario.ts'
import { SerialLine } from './serial-line.ts'
import { createTestServer, replyTo } from './test-socket.ts'

export type SimulatorOptions = { scenario: Scenario; seed: number; clock?: Clock }

export type Simulator = {
  /** Opens the sockets that are named; answers with their addresses, the real port in the place of 0. */
  listen(addresses: {
    link?: Address
    test?: Address
  }): Promise<{ link: Address | null; test: Address | null }>
  close(): Promise<void>
  /** Throws a RangeError for a bench that the scenario does not have. */
  bench(benchId: string): SimulatedBench
  line(benchId: string, instrument: InstrumentName): SerialLine
  /** The reply to one ask of the test socket, without the socket. */
  ask(ask: Record<string, unknown>): ReturnType<typeof replyTo>
  /** Brings all benches up to the clock. Asking an instrument does so too. */
  advance(): void
}

const idleMilliseconds = 200

const realClock: Clock = { now: () => performance.now() / 1000 }

/**
 * The virtual benches of a scenario. The same seed, clock and questions give the same bytes. A slow timer keeps the
 * benches moving when nobody asks, so that watchdogs act and coils cool.
 */
export function createSimulator({ scenario, seed, clock = realClock }: SimulatorOptions): Simulator {
  const benches = new Map<string, SimulatedBench>()
  const lines = new Map<string, SerialLine>()
  const sockets = new Set<Socket>()
  const servers: Server[] = []
  let timer: NodeJS.Timeout | null = null

  scenario.benches.forEach((bench, index) => {
    const simulated = new SimulatedBench(bench, seed + 7919 * index, clock)
    benches.set(bench.benchId, simulated)
    for (const name of instrumentNames) {
      const key = `${bench.benchId}/${name}`
      lines.set(key, new SerialLine(() => simulated.instrument(name), new Random(seed, key)))
    }
  })

  const room = {
    bench: (benchId: string) => benches.get(benchId) ?? null,
    line: (benchId: string, instrument: InstrumentName) => lines.get(`${benchId}/${instrument}`) ?? null,
  }
  const advance = () => {
    for (const bench of benches.values()) bench.advance()
  }

  return {
    advance,
    async listen({ link, test }) {
      const open = async (server: Server, address: Address | undefined) => {
        if (address === undefined) return null
        servers.push(server)
        return listenAt(server, address)
      }
      timer ??= setInterval(advance, idleMilliseconds)
      timer.unref()
      return {
        link: await open(createLinkServer(room, sockets), link),
        test: await open(createTestServer(room, sockets), test),
      }
    },
    async close() {
      if (timer) clearInterval(timer)
      timer = null
      for (const line of lines.values()) line.close()
      for (const socket of sockets) socket.destroy()
      await Promise.all(
        servers.splice(0).map((server) => new Promise<void>((resolve) => server.close(() => resolve()))),
      )
    },
    bench: (benchId) => required(room.bench(benchId), benchId),
    line: (benchId, instrument) => required(room.line(benchId, instrument), `${benchId}/${instrument}`),
    ask: (ask) => replyTo(room, JSON.stringify(ask)),
  }
}

function required<T>(value: T | null, name: string): T {
  if (value === null) throw new RangeError(`There is no ${name} in the scenario.`)
  return value
}
