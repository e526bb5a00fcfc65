import { createRequire } from 'node:module'
import { connect, type Socket } from 'node:net'

// The package ships its types beside the map that hides them, so tsconfig.json names their file; a loader that heeds
// that path would run the declarations. Seen from another package the path does not count.
const fromHere = createRequire(import.meta.url)
const fromStream = createRequire(fromHere.resolve('@serialport/stream'))
const { MockPortBinding }: typeof import('@serialport/binding-mock') = fromStream('@serialport/binding-mock')
type MockPortBinding = InstanceType<typeof MockPortBinding>

const openSeconds = 2
// Above this the socket is paused until the stream has read: the rest waits in the simulator, as behind a full UART.
const maxWaitingBytes = 64 * 1024

type VirtualOptions = {
  /** The simulator's link socket: `host:port`, or the path of a local socket. */
  link: string
  /** Most bytes that one read gives, as the small buffer of a real port does. */
  maxReadSize?: number
}

export type VirtualOpenOptions = {
  path: string
  baudRate: number
  dataBits?: 5 | 6 | 7 | 8
  parity?: string
  stopBits?: 1 | 1.5 | 2
}

/** The part of a serial binding that a stream uses. */
export type VirtualBinding = {
  list(): Promise<{ path: string }[]>
  open(options: VirtualOpenOptions): Promise<MockPortBinding>
}

const portDefaults = {
  dataBits: 8,
  lock: true,
  stopBits: 1,
  parity: 'none',
  rtscts: false,
  xon: false,
  xoff: false,
  xany: false,
  hupcl: true,
}

class VirtualPort extends MockPortBinding {
  readonly #socket: Socket
  #lost: Error | null = null
  #failRead: ((error: Error) => void) | null = null

  constructor(socket: Socket, early: Buffer, options: VirtualOpenOptions, maxReadSize: number) {
    const info = { path: options.path, serialNumber: options.path }
    const nothing = { manufacturer: undefined, pnpId: undefined, locationId: undefined }
    super(
      {
        data: Buffer.alloc(0),
        echo: false,
        record: false,
        maxReadSize,
        info: { ...info, ...nothing, productId: undefined, vendorId: undefined },
      },
      { ...portDefaults, ...options },
    )
    this.#socket = socket
    if (early.length > 0) this.emitData(early)
    socket.on('data', (data) => {
      if (!this.isOpen) return
      this.emitData(data)
      if (this.port.data.length > maxWaitingBytes) socket.pause()
    })
    socket.on('error', () => {})
    socket.on('close', () => {
      this.#lost = new Error('The line was cut')
      this.#failRead?.(this.#lost)
    })
    socket.resume()
  }

  override read(
    buffer: Buffer,
    offset: number,
    length: number,
  ): Promise<{ buffer: Buffer; bytesRead: number }> {
    if (this.#lost) return Promise.reject(this.#lost)
    return new Promise((resolve, reject) => {
      this.#failRead = reject
      super
        .read(buffer, offset, length)
        .then((result) => {
          if (this.port.data.length < maxWaitingBytes / 4) this.#socket.resume()
          return result
        })
        .then(resolve, reject)
    })
  }

  override write(buffer: Buffer): Promise<void> {
    if (!this.isOpen) return Promise.reject(new Error('Port is not open'))
    if (this.#lost) return Promise.reject(this.#lost)
    return new Promise((resolve, reject) => {
      // A copy, since the stream may use its buffer again.
      this.#socket.write(Buffer.from(buffer), (error) => (error ? reject(error) : resolve()))
    })
  }

  override async close(): Promise<void> {
    this.#socket.destroySoon()
    await super.close()
  }
}

function dial(link: string): Socket {
  const port = /^(.+):(\d+)$/.exec(link)
  return port ? connect({ host: port[1], port: Number(port[2]), noDelay: true }) : connect({ path: link })
}

/** Connects to an instrument of the simulator. Resolves with the bytes that came behind the simulator's `OK`. */
function greet(link: string, name: string): Promise<{ socket: Socket; early: Buffer }> {
  return new Promise((resolve, reject) => {
    const socket = dial(link)
    let received = Buffer.alloc(0)
    const fail = (reason: string) => {
      clearTimeout(timer)
      socket.destroy()
      reject(new Error(reason))
    }
    const timer = setTimeout(() => fail('The simulator does not answer'), openSeconds * 1000)
    socket.once('connect', () => socket.write(`OPEN ${name}\n`))
    socket.on('error', (error) => fail(error.message))
    socket.on('close', () => fail('The simulator hung up'))
    socket.on('data', (data) => {
      received = Buffer.concat([received, data])
      const end = received.indexOf('\n')
      if (end === -1) {
        if (received.length > 1024) fail('The simulator does not speak the link protocol')
        return
      }
      const answer = received.toString('latin1', 0, end)
      if (answer !== 'OK')
        return fail(answer.startsWith('NO ') ? answer.slice(3) : `Not understood: ${answer}`)
      clearTimeout(timer)
      socket.pause()
      socket.removeAllListeners()
      resolve({ socket, early: received.subarray(end + 1) })
    })
  })
}

/**
 * A serial binding whose ports are lines of the simulator, named `virtual:<bench>/<instrument>`.
 * The end of the socket is an unplugged cable: the stream closes with a `DisconnectedError`.
 */
export function createVirtualBinding({ link, maxReadSize = 1024 }: VirtualOptions): VirtualBinding {
  return {
    list: async () => [],
    async open(options) {
      const match = /^virtual:([\w.-]+\/[\w.-]+)$/.exec(options.path)
      if (!match?.[1]) throw new Error(`No virtual port: ${options.path}`)
      const { socket, early } = await greet(link, match[1])
      return new VirtualPort(socket, early, options, maxReadSize)
    },
  }
}
