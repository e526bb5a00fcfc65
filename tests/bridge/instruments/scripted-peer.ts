import { once } from 'node:events'
import { createServer, type Socket } from 'node:net'
import { createLine, type Line } from '#bridge/instruments/line.ts'
import { createOpenPort } from '#bridge/instruments/open-port.ts'
import { reached } from './room.ts'

const serial = { baudRate: 115_200, dataBits: 8, parity: 'none', stopBits: 1 } as const

/** How the peer sends an answer; the whole script of a bad line. */
export type Deliver = (answer: string, send: (bytes: string) => void, message: string) => void

/**
 * An instrument that a test scripts, at the far end of a link socket. It knows `ECHO? n`, `*OPC?`, `*ESE` and `SYST:ERR?`
 * (always no error), keeps every message that it received, and hands each answer to `deliver`.
 */
export async function createPeer(deliver: Deliver = (answer, send) => send(answer)) {
  const messages: { text: string; at: number }[] = []
  const sockets = new Set<Socket>()
  const calls: number[] = []
  let eventEnable = '0'
  const peer = {
    messages,
    /** When each connection was asked for, in milliseconds. */
    calls,
    deliver,
    isRefusing: false,
    texts: () => messages.map(({ text }) => text),
    send(bytes: string) {
      for (const socket of sockets) socket.write(bytes, 'latin1')
    },
    cut() {
      for (const socket of sockets) socket.destroy()
    },
    link: '',
    async close() {
      for (const socket of sockets) socket.destroy()
      server.close()
      await once(server, 'close')
    },
  }
  const answerTo = (message: string) =>
    message.split(';').flatMap((unit) => {
      if (unit === '*OPC?') return ['1']
      if (unit === '*ESE?') return [eventEnable]
      if (unit === 'SYST:ERR?') return ['0,"No error"']
      if (unit.startsWith('ECHO? ')) return [unit.slice(6)]
      if (unit.startsWith('*ESE ')) eventEnable = unit.slice(5)
      return []
    })
  const server = createServer((socket) => {
    calls.push(performance.now())
    sockets.add(socket)
    socket.setNoDelay(true)
    socket.on('error', () => {})
    socket.on('close', () => sockets.delete(socket))
    let input = ''
    let isOpen = false
    socket.on('data', (data) => {
      input += data.toString('latin1')
      for (let end = input.indexOf('\n'); end !== -1; end = input.indexOf('\n')) {
        const message = input.slice(0, end)
        input = input.slice(end + 1)
        if (!isOpen) {
          isOpen = true
          if (peer.isRefusing) socket.end('NO line cut\n')
          else socket.write('OK\n')
          continue
        }
        if (message === '') continue
        messages.push({ text: message, at: performance.now() })
        const answer = answerTo(message).join(';')
        if (answer === '') continue
        peer.deliver(`${answer}\n`, (bytes) => socket.destroyed || socket.write(bytes, 'latin1'), message)
      }
    })
  })
  server.listen(0, '127.0.0.1')
  await once(server, 'listening')
  const address = server.address()
  if (address === null || typeof address === 'string') throw new Error('No port')
  peer.link = `127.0.0.1:${address.port}`
  return peer
}

export type Peer = Awaited<ReturnType<typeof createPeer>>

export function lineTo(peer: Peer, options: { limitSeconds?: number; greeting?: string } = {}): Line {
  const openPort = createOpenPort({ link: peer.link })
  return createLine({ openPort: () => openPort('virtual:bench/peer', serial), ...options })
}

export async function openLineTo(
  peer: Peer,
  options: { limitSeconds?: number; greeting?: string } = {},
): Promise<Line> {
  const line = lineTo(peer, options)
  line.open()
  await reached(line, 'open')
  return line
}

/** `text` as the answer of an echo. */
export const whole = (wanted: string) => (answer: string) => (answer === wanted ? answer : null)

/** A repeatable source of numbers in [0, 1): the 32-bit mix of a counter. */
export function seeded(seed: number): () => number {
  let state = seed >>> 0
  return () => {
    state = (state + 0x6d2b79f5) >>> 0
    let mixed = Math.imul(state ^ (state >>> 15), state | 1)
    mixed ^= mixed + Math.imul(mixed ^ (mixed >>> 7), mixed | 61)
    return ((mixed ^ (mixed >>> 14)) >>> 0) / 4_294_967_296
  }
}
