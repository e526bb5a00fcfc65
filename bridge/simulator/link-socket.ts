import { createServer, type Server, type Socket } from 'node:net'
import { type InstrumentName, instrumentNames, type SimulatedBench } from './bench.ts'
import type { SerialLine } from './serial-line.ts'

export type Room = {
  bench(benchId: string): SimulatedBench | null
  line(benchId: string, instrument: InstrumentName): SerialLine | null
}

const lineLimit = 200

/** The far ends of the serial cables: `OPEN <bench>/<instrument>`, `OK`, then raw bytes; or the camera's pictures. */
export function createLinkServer(room: Room, sockets: Set<Socket>): Server {
  return createServer((socket) => {
    sockets.add(socket)
    socket.setEncoding('latin1')
    socket.setNoDelay(true)
    socket.on('error', () => socket.destroy())
    socket.on('close', () => sockets.delete(socket))
    let opening = ''
    const onOpening = (text: string) => {
      opening += text
      const end = opening.indexOf('\n')
      if (end === -1) {
        if (opening.length > lineLimit) refuse(socket, 'no such line')
        return
      }
      socket.off('data', onOpening)
      const reason = open(room, socket, opening.slice(0, end).trim(), opening.slice(end + 1))
      if (reason) refuse(socket, reason)
    }
    socket.on('data', onOpening)
  })
}

/** Why the line cannot be opened; null once it is. */
function open(room: Room, socket: Socket, request: string, rest: string): string | null {
  const match = /^OPEN ([\w-]+)\/([\w-]+)$/.exec(request)
  const [, benchId = '', name = ''] = match ?? []
  const bench = room.bench(benchId)
  if (!bench) return `no bench ${benchId || 'named'}`
  if (name === 'camera') {
    showPictures(bench, socket, rest)
    return null
  }
  const instrument = instrumentNames.find((known) => known === name)
  const line = instrument && room.line(benchId, instrument)
  if (!line) return `no instrument ${name}`
  const cable = {
    send: (bytes: string) => {
      socket.write(bytes, 'latin1')
    },
    unplug: () => {
      socket.destroy()
    },
  }
  if (!line.plug(cable)) return 'line cut'
  socket.on('close', () => line.unplugged(cable))
  socket.write('OK\n')
  socket.on('data', (bytes: string) => line.receive(bytes))
  if (rest !== '') line.receive(rest)
  return null
}

function showPictures(bench: SimulatedBench, socket: Socket, rest: string): void {
  let input = rest
  const answer = () => {
    for (let end = input.indexOf('\n'); end !== -1; end = input.indexOf('\n')) {
      const request = input.slice(0, end).trim()
      input = input.slice(end + 1)
      socket.write(
        request === 'PICTURE'
          ? `${JSON.stringify(bench.picture())}\n`
          : 'NO the camera knows PICTURE alone\n',
      )
    }
    if (input.length > lineLimit) socket.destroy()
  }
  socket.write('OK\n')
  socket.on('data', (text: string) => {
    input += text
    answer()
  })
  answer()
}

function refuse(socket: Socket, reason: string): void {
  socket.end(`NO ${reason}\n`)
}
