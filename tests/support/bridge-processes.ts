import { randomInt } from 'node:crypto'
import { mkdtempSync, rmSync } from 'node:fs'
import { connect } from 'node:net'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { createInterface } from 'node:readline'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import { bridgeSecret, origin, quickBench } from './bridge.ts'
import { type Receiver, startReceiver } from './bridge-receiver.ts'
import { freePort, type Process, startProcess, until } from './processes.ts'

export type TestSocket = {
  /** Puts one ask of the simulator's test socket; rejects with its reason. */
  ask: <Answer = unknown>(ask: Record<string, unknown>) => Promise<Answer>
  close: () => void
}

/** Connects to the test socket of a simulator at host and port. */
export async function connectTestSocket(port: number): Promise<TestSocket> {
  const socket = connect({ host: '127.0.0.1', port })
  const waiting = new Map<number, (reply: { ok: boolean; answer?: unknown; reason?: string }) => void>()
  await new Promise<void>((resolve, reject) => {
    socket.once('connect', resolve)
    socket.once('error', reject)
  })
  createInterface({ input: socket }).on('line', (line) => {
    const reply = JSON.parse(line)
    waiting.get(reply.id)?.(reply)
    waiting.delete(reply.id)
  })
  return {
    ask: <Answer>(asked: Record<string, unknown>) =>
      new Promise<Answer>((resolve, reject) => {
        const id = randomInt(2 ** 40)
        waiting.set(id, ({ ok, answer, reason }) =>
          ok ? resolve(answer as Answer) : reject(new Error(reason)),
        )
        socket.write(`${JSON.stringify({ id, bench: 'bench-1', ...asked })}\n`)
      }),
    close: () => socket.destroy(),
  }
}

export type ProcessSite = {
  address: string
  receiver: Receiver
  test: TestSocket
  bridge: Process
  startBridge: () => Promise<void>
  close: () => Promise<void>
}

/** Simulator and bridge as processes of their own, from their sources; the receiver in this one. */
export async function startProcessSite(benches: BenchConfig[] = [quickBench()]): Promise<ProcessSite> {
  const directory = mkdtempSync(join(tmpdir(), 'bridge-process-test-'))
  const [link, testPort, bridgePort] = [await freePort(), await freePort(), await freePort()]
  const receiver = await startReceiver(benches)
  const env = {
    BRIDGE_HOST: '127.0.0.1',
    BRIDGE_PORT: String(bridgePort),
    BRIDGE_SECRET: bridgeSecret,
    BRIDGE_ID: 'room-1',
    APP_URL: receiver.url,
    ALLOWED_ORIGINS: origin,
    SPOOL_URL: `file:${join(directory, 'spool.db')}`,
    SIMULATOR_LINK: `127.0.0.1:${link}`,
    SIMULATOR_TEST: `127.0.0.1:${testPort}`,
  }
  const run = (name: string, source: string) => startProcess(name, ['--import', 'tsx', source], { env })
  const simulator = run('simulator', 'bridge/simulator/main.ts')
  await until('the simulator listens', () => simulator.output().includes('listening'), 30_000)
  const address = `http://127.0.0.1:${bridgePort}`
  const site: ProcessSite = {
    address,
    receiver,
    test: await connectTestSocket(testPort),
    bridge: run('bridge', 'bridge/main.ts'),
    async startBridge() {
      site.bridge = run('bridge', 'bridge/main.ts')
      await isUp()
    },
    async close() {
      await site.bridge.stop()
      site.test.close()
      await simulator.stop()
      await receiver.close()
      rmSync(directory, { recursive: true, force: true })
    },
  }
  const isUp = () =>
    until(
      'the bridge answers',
      async () => {
        const { exitCode } = site.bridge.child
        if (exitCode !== null) throw new Error(`The bridge ended: ${site.bridge.output()}`)
        return (await fetch(`${address}/health`).catch(() => null))?.ok
      },
      30_000,
    )
  await isUp()
  return site
}
