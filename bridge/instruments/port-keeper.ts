import type { SerialPortStream } from '@serialport/stream'

const firstRetrySeconds = 0.25
const lastRetrySeconds = 5

type PortKeeperOptions = {
  openPort: () => Promise<SerialPortStream>
  /** A port is open. Rejects when nothing useful is at its other end: the port is then lost. */
  onOpen: (port: SerialPortStream) => Promise<void>
  /** The port was lost, or could not be opened; it is tried again. */
  onLost: (reason: string) => void
}

/** Keeps a port open from `start` to `stop`: what is lost is tried again after 0.25 s, doubled each time up to 5 s. */
export class PortKeeper {
  readonly #options: PortKeeperOptions
  #wanted = false
  #port: SerialPortStream | null = null
  #opening: Promise<void> | null = null
  #timer: NodeJS.Timeout | null = null
  #retrySeconds = firstRetrySeconds

  constructor(options: PortKeeperOptions) {
    this.#options = options
  }

  start(): void {
    if (this.#wanted) return
    this.#wanted = true
    this.#retrySeconds = firstRetrySeconds
    this.#connect()
  }

  /** Resolves when the port is closed. Nothing is tried afterwards. */
  async stop(): Promise<void> {
    this.#wanted = false
    if (this.#timer) clearTimeout(this.#timer)
    this.#timer = null
    const port = this.#port
    this.#port = null
    await this.#opening
    if (port) await closePort(port)
  }

  /** Gives up the present port, as if its cable had been pulled. */
  giveUp(reason: string): void {
    const port = this.#port
    if (port) this.#lose(port, reason)
  }

  #connect(): void {
    const opening = this.#attempt().finally(() => {
      if (this.#opening === opening) this.#opening = null
    })
    this.#opening = opening
  }

  async #attempt(): Promise<void> {
    let port: SerialPortStream
    try {
      port = await this.#options.openPort()
    } catch (error) {
      if (this.#wanted) this.#retry(error instanceof Error ? error.message : String(error))
      return
    }
    if (!this.#wanted) return closePort(port)
    this.#port = port
    port.on('close', (error: Error | null) => this.#lose(port, error?.message ?? 'The port was closed'))
    port.on('error', (error: Error) => this.#lose(port, error.message))
    try {
      await this.#options.onOpen(port)
      if (this.#port === port) this.#retrySeconds = firstRetrySeconds
    } catch (error) {
      this.#lose(port, error instanceof Error ? error.message : String(error))
    }
  }

  #lose(port: SerialPortStream, reason: string): void {
    if (this.#port !== port) return
    this.#port = null
    void closePort(port)
    this.#retry(reason)
  }

  #retry(reason: string): void {
    const seconds = this.#retrySeconds
    this.#retrySeconds = Math.min(seconds * 2, lastRetrySeconds)
    this.#timer = setTimeout(() => {
      this.#timer = null
      this.#connect()
    }, seconds * 1000)
    this.#options.onLost(reason)
  }
}

function closePort(port: SerialPortStream): Promise<void> {
  return new Promise((resolve) => {
    if (!port.isOpen) return resolve()
    port.close(() => resolve())
  })
}
