import { createHmac } from 'node:crypto'
import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import pino from 'pino'
import { WebSocket } from 'ws'
import { demoBenches } from '#app/db/demo-benches.ts'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import { type Command, type CommandReply, commandReplySchema, type Ticket } from '#app/protocol/commands.ts'
import {
  type BenchEvent,
  type BenchState,
  type FromBridge,
  type FromBrowser,
  fromBridgeSchema,
} from '#app/protocol/messages.ts'
import type { Actor } from '#app/safety/types.ts'
import { type Bridge, type BridgeOptions, createBridge } from '#bridge/bridge.ts'
import { createOpenPort } from '#bridge/instruments/open-port.ts'
import { demoScenario } from '#bridge/simulator/scenario.ts'
import { createSimulator, type Simulator } from '#bridge/simulator/simulator.ts'
import { type Receiver, startReceiver } from './bridge-receiver.ts'
import { bridgeSecret, sign } from './bridge-signing.ts'
import { until } from './processes.ts'

export { bridgeSecret, sign }

export const origin = 'http://127.0.0.1:3999'

const person = (personId: string, name: string, role: Actor['role']): Actor => ({
  personId,
  name,
  role,
  acknowledged: true,
})
export const people = {
  technician: person('person-t', 'Tove Lind', 'technician'),
  instructor: person('person-i', 'Ines Rahm', 'instructor'),
  student: person('person-s', 'Sanna Berg', 'student'),
  otherStudent: person('person-o', 'Otto Krall', 'student'),
  guest: person('person-g', 'Guest 4', 'guest'),
}

/** A bench of the demo, quick to warm up and to settle. */
export function quickBench(changes: Partial<BenchConfig['limits']> = {}, benchId = 'bench-1'): BenchConfig {
  const bench = demoBenches.find((demo) => demo.benchId === benchId)
  if (!bench) throw new Error(`The demo has no ${benchId}`)
  return {
    ...bench,
    window: { seconds: 1.5, holdSeconds: 0.3 },
    limits: {
      ...bench.limits,
      warmUpSeconds: 0.3,
      anodeVoltsPerSecond: 400,
      coilAmpsPerSecond: 4,
      ...changes,
    },
  }
}

/** Sends a signed request; the answer's body is read as JSON. */
export async function signedRequest(
  address: string,
  method: 'POST' | 'PUT',
  path: string,
  body: unknown,
): Promise<{ status: number; body: unknown }> {
  const text = JSON.stringify(body)
  const response = await fetch(`${address}${path}`, { method, body: text, headers: sign(method, path, text) })
  return { status: response.status, body: await response.json() }
}

export const signedPost = (address: string, path: string, body: unknown) =>
  signedRequest(address, 'POST', path, body)

/** Commands a bench as the app does for a person. */
export async function command(
  address: string,
  actor: Actor,
  asked: Command,
  benchId = 'bench-1',
): Promise<CommandReply> {
  const reply = await signedPost(address, `/benches/${benchId}/commands`, { actor, command: asked })
  return commandReplySchema.parse(reply.body)
}

/** The same, for a command that has to be carried out. */
export async function accept(
  address: string,
  actor: Actor,
  asked: Command,
  benchId = 'bench-1',
): Promise<CommandReply> {
  const reply = await command(address, actor, asked, benchId)
  if (!reply.accepted) throw new Error(`Refused: ${JSON.stringify(reply.refusals)}`)
  return reply
}

export function writeTicket(changes: Partial<Ticket> = {}, secret = bridgeSecret): string {
  const now = Date.now() / 1000
  const ticket: Ticket = {
    use: 'ticket',
    personId: people.student.personId,
    name: people.student.name,
    role: 'student',
    benchIds: null,
    room: false,
    issuedAt: now,
    expiresAt: now + 60,
    ...changes,
  }
  const text = Buffer.from(JSON.stringify(ticket)).toString('base64url')
  return `${text}.${createHmac('sha256', secret).update(text).digest('hex')}`
}

export const ticketOf = (actor: Actor, changes: Partial<Ticket> = {}): string =>
  writeTicket({
    personId: actor.personId,
    name: actor.name,
    role: actor.role,
    room: actor.role === 'technician' || actor.role === 'instructor',
    ...changes,
  })

export type Page = {
  socket: WebSocket
  messages: FromBridge[]
  hello: Extract<FromBridge, { type: 'hello' }>
  send: (message: FromBrowser) => void
  /** Newest state of a bench that this page was told. */
  state: (benchId?: string) => BenchState | undefined
  events: () => BenchEvent[]
  /** Says 'present' now and every second until it is closed or told to stop. */
  stay: (benchId?: string) => () => void
  close: () => Promise<void>
}

/** Connects as a page does. Rejects with the HTTP status when the upgrade is refused. Every message is checked by its schema. */
export function openSocket(
  address: string,
  query: { ticket: string } | { resume: string } | Record<string, never>,
  headers: Record<string, string> = { origin },
): Promise<Page> {
  const url = `${address.replace('http', 'ws')}/telemetry?${new URLSearchParams(query)}`
  const socket = new WebSocket(url, { headers })
  const messages: FromBridge[] = []
  return new Promise((resolve, reject) => {
    socket.on('unexpected-response', (_, response) => reject(new Error(`HTTP ${response.statusCode}`)))
    socket.on('error', reject)
    socket.on('message', (data) => {
      const message = fromBridgeSchema.parse(JSON.parse(data.toString()))
      messages.push(message)
      if (message.type !== 'hello') return
      const send = (said: FromBrowser) => {
        if (socket.readyState === socket.OPEN) socket.send(JSON.stringify(said))
      }
      resolve({
        socket,
        messages,
        hello: message,
        send,
        state: (benchId = 'bench-1') => {
          const last = messages.findLast((said) => said.type === 'state' && said.state.benchId === benchId)
          return last?.type === 'state' ? last.state : undefined
        },
        events: () => messages.flatMap((said) => (said.type === 'event' ? [said.event] : [])),
        stay(benchId = 'bench-1') {
          const present = () => send({ type: 'present', version: 1, benchId, input: true })
          present()
          const timer = setInterval(present, 1000)
          socket.on('close', () => clearInterval(timer))
          return () => clearInterval(timer)
        },
        close: () =>
          new Promise((done) => {
            if (socket.readyState === socket.CLOSED) return done()
            socket.on('close', () => done())
            socket.close()
          }),
      })
    })
  })
}

/** Waits for a state of a bench that `isWanted`, and answers with it. */
export function waitForState(
  page: Page,
  isWanted: (state: BenchState) => boolean,
  { benchId = 'bench-1', limitMs = 10_000 } = {},
): Promise<BenchState> {
  return until(
    `a state of ${benchId}`,
    () => {
      const state = page.state(benchId)
      return state && isWanted(state) ? state : null
    },
    limitMs,
  ).catch((error: unknown) => {
    throw new Error(`${String(error)}; the last state was ${JSON.stringify(page.state(benchId))}`)
  })
}

export type BridgeSite = {
  simulator: Simulator
  bridge: Bridge
  receiver: Receiver
  address: string
  link: string
  /** Bridge again, on the same spool, as after a restart. */
  restart: (changes?: Partial<BridgeOptions>) => Promise<void>
  /** True values at the tube's terminals. */
  terminal: (benchId?: string) => { anodeVolts: number; coilAmps: number; heaterVolts: number }
  ask: (ask: Record<string, unknown>) => unknown
  close: () => Promise<void>
}

/** Simulator, receiver and bridge in this process, over real sockets. */
export async function startBridgeSite({
  benches = [quickBench()],
  changes = {} as Partial<BridgeOptions>,
} = {}): Promise<BridgeSite> {
  const directory = mkdtempSync(join(tmpdir(), 'bridge-test-'))
  const simulator = createSimulator({ scenario: demoScenario, seed: 7 })
  const { link } = await simulator.listen({ link: '127.0.0.1:0' })
  if (link === null) throw new Error('The simulator has no link')
  const receiver = await startReceiver(benches)
  const start = (more: Partial<BridgeOptions> = {}) =>
    createBridge({
      openPort: createOpenPort({ link }),
      log: pino({ level: 'silent' }),
      secret: bridgeSecret,
      bridgeId: 'room-1',
      appUrl: receiver.url,
      allowedOrigins: [origin],
      spoolUrl: `file:${join(directory, 'spool.db')}`,
      cameraLink: link,
      host: '127.0.0.1',
      port: 0,
      ...changes,
      ...more,
    })
  const site: BridgeSite = {
    simulator,
    bridge: await start(),
    receiver,
    link,
    get address() {
      return site.bridge.address
    },
    async restart(more) {
      await site.bridge.close()
      site.bridge = await start(more)
    },
    terminal(benchId = 'bench-1') {
      const { anodeVolts, signedCoilAmps, heaterVolts } = simulator.bench(benchId).model
      return { anodeVolts, coilAmps: signedCoilAmps, heaterVolts }
    },
    ask(asked) {
      const reply = simulator.ask({ id: 1, bench: 'bench-1', ...asked })
      if (!reply.ok) throw new Error(reply.reason)
      return reply.answer
    },
    async close() {
      await site.bridge.close()
      await receiver.close()
      await simulator.close()
      rmSync(directory, { recursive: true, force: true })
    },
  }
  return site
}

/** Waits until every output was read back as off and every channel has a fresh reading. */
export const waitUntilOff = (page: Page, benchId = 'bench-1'): Promise<BenchState> =>
  waitForState(
    page,
    ({ phase, contacts }) =>
      phase === 'off' && contacts.some(({ name, closed }) => name === 'signal' && closed),
    { benchId },
  )

/** Takes the controls and warms the heater up, at the bridge of this address. */
export async function bringUpReady(address: string, page: Page, actor: Actor, benchId = 'bench-1') {
  await waitUntilOff(page, benchId)
  await accept(address, actor, { kind: 'take-controls' }, benchId)
  page.stay(benchId)
  await accept(address, actor, { kind: 'switch-heater', on: true }, benchId)
  return waitForState(page, ({ phase }) => phase === 'ready', { benchId })
}

/** Brings a bench up to an anode voltage and a coil current, and waits until both ramps have arrived. */
export async function bringUpLive(
  address: string,
  page: Page,
  actor: Actor,
  { volts = 200, amps = 1, benchId = 'bench-1' } = {},
): Promise<BenchState> {
  await bringUpReady(address, page, actor, benchId)
  await accept(address, actor, { kind: 'set-coils', amps }, benchId)
  await accept(address, actor, { kind: 'set-anode', volts }, benchId)
  return waitForState(
    page,
    ({ phase, anode, coils }) => phase === 'live' && anode.commanded === volts && coils.commanded === amps,
    { benchId },
  )
}

export const bringToReady = (site: BridgeSite, ...rest: Rest<typeof bringUpReady>) =>
  bringUpReady(site.address, ...rest)
export const bringToLive = (site: BridgeSite, ...rest: Rest<typeof bringUpLive>) =>
  bringUpLive(site.address, ...rest)

type Rest<F> = F extends (address: string, ...rest: infer R) => unknown ? R : never
