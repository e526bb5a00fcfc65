import { connect, type Socket } from 'node:net'
import { type Address, connectOptions } from '#bridge/simulator/addresses.ts'

/** A plain client of the simulator's sockets that keeps all it received. */
export class LineClient {
  readonly #socket: Socket
  #received = ''
  #isClosed = false
  /** Length of each piece in which the bytes arrived. */
  readonly pieces: number[] = []
  readonly #waiting = new Set<() => void>()

  private constructor(socket: Socket) {
    this.#socket = socket
    socket.setEncoding('latin1')
    socket.setNoDelay(true)
    socket.on('data', (text: string) => {
      this.#received += text
      this.pieces.push(text.length)
      this.#wake()
    })
    socket.on('error', () => socket.destroy())
    socket.on('close', () => {
      this.#isClosed = true
      this.#wake()
    })
  }

  static async connect(address: Address): Promise<LineClient> {
    const socket = connect(connectOptions(address))
    await new Promise<void>((resolve, reject) => {
      socket.once('connect', resolve)
      socket.once('error', reject)
    })
    return new LineClient(socket)
  }

  /** Connects and opens a line; throws with the simulator's reason where it says no. */
  static async open(address: Address, line: string): Promise<LineClient> {
    const client = await LineClient.connect(address)
    const answer = await client.ask(`OPEN ${line}`)
    if (answer !== 'OK') {
      client.close()
      throw new Error(answer)
    }
    return client
  }

  get isClosed(): boolean {
    return this.#isClosed
  }

  send(text: string): void {
    this.#socket.write(text, 'latin1')
  }

  async ask(text: string): Promise<string> {
    this.send(`${text}\n`)
    return this.line()
  }

  /** The next line received, without its end; throws once the other side has closed. */
  async line(): Promise<string> {
    await this.until(() => this.#received.includes('\n') || this.#isClosed)
    const end = this.#received.indexOf('\n')
    if (end === -1) throw new Error('closed')
    const line = this.#received.slice(0, end)
    this.#received = this.#received.slice(end + 1)
    return line
  }

  /** Everything received so far that was not taken as a line. */
  take(): string {
    const text = this.#received
    this.#received = ''
    return text
  }

  async closed(): Promise<void> {
    await this.until(() => this.#isClosed)
  }

  async until(isDone: () => boolean): Promise<void> {
    while (!isDone()) await new Promise<void>((resolve) => this.#waiting.add(resolve))
  }

  close(): void {
    this.#socket.destroy()
  }

  #wake(): void {
    for (const resolve of this.#waiting) resolve()
    this.#waiting.clear()
  }
}
