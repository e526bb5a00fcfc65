import type { SerialPortStream } from '@serialport/stream'
import { parseErrorEntry } from './answers.ts'
import { Dialogue, type LineCounts, type Parse } from './dialogue.ts'
import { InstrumentRefusedError, isUnanswered, LineError } from './line-errors.ts'
import { PortKeeper } from './port-keeper.ts'
import type { PortStatus } from './types.ts'

const defaultLimitSeconds = 0.25
const retries = 1
// The error queue of an instrument is finite; after this many entries it is left alone.
const maxErrorEntries = 10

type Queued = { text: string; urgent: boolean; run(): Promise<void>; reject(error: Error): void }
type Query = Queued & { kind: 'query' }
type SetCommand = Queued & { kind: 'set'; sent: boolean; overtaken: boolean }
type Command = Query | SetCommand

export type LineOptions = {
  openPort: () => Promise<SerialPortStream>
  /** Time limit of one answer, in seconds. */
  limitSeconds?: number
  /**
   * Sent first whenever the port is opened, and last when a line that does not answer is given up: the line may still
   * carry one way. For a supply, all outputs off.
   */
  greeting?: string
}

/**
 * The command queue over one serial port: one command in flight, urgent ones first.
 * The line is `open` when an instrument has answered at the other end, not when the port has.
 * A line whose instrument does not answer for about a second, whatever it is asked, is lost.
 */
export class Line {
  readonly counts: LineCounts = { retries: 0, rubbishLines: 0, synchronisations: 0, losses: 0 }
  readonly #limitSeconds: number
  readonly #greeting: string
  readonly #keeper: PortKeeper
  readonly #listeners: ((status: PortStatus, reason: string | null) => void)[] = []
  readonly #queue: Command[] = []
  #status: PortStatus = 'closed'
  #dialogue: Dialogue | null = null
  #running: Command | null = null
  #synchronising = false
  /** Sets that were sent and whose entry of the error queue has not been read. */
  #unconfirmed = 0

  constructor(options: LineOptions) {
    this.#limitSeconds = options.limitSeconds ?? defaultLimitSeconds
    this.#greeting = options.greeting ? `${options.greeting}\n` : ''
    this.#keeper = new PortKeeper({
      openPort: options.openPort,
      onOpen: (port) => this.#attach(port),
      onLost: (reason) => this.#detach('lost', reason),
    })
  }

  get status(): PortStatus {
    return this.#status
  }

  onStatus(listener: (status: PortStatus, reason: string | null) => void): void {
    this.#listeners.push(listener)
  }

  /** Opens the port and keeps it open until `close`. Never throws: what fails is told by `onStatus`. */
  open(): void {
    if (this.#status !== 'closed') return
    this.#setStatus('opening', null)
    this.#keeper.start()
  }

  /** Drops what is queued, closes the port and cancels every timer. */
  async close(): Promise<void> {
    if (this.#status !== 'closed') this.#detach('closed', null)
    await this.#keeper.stop()
  }

  /**
   * Asks, and resolves with what `parse` makes of the answer. Asked again once when there was no answer that it takes.
   * Rejects with `LineError`.
   */
  query<T extends NonNullable<unknown>>(
    text: string,
    parse: Parse<T>,
    { urgent = false }: { urgent?: boolean } = {},
  ): Promise<T> {
    return new Promise((resolve, reject) => {
      const run = () => this.#runQuery(text, parse).then(resolve, reject)
      this.#enqueue({ kind: 'query', text, urgent, run, reject })
    })
  }

  /**
   * Sends a command and reads the error queue. Never sent twice. Rejects with `InstrumentRefusedError` when refused, with
   * `LineError` otherwise. An urgent one goes ahead of everything queued and makes void the sets that are not urgent.
   */
  set(text: string, { urgent = false }: { urgent?: boolean } = {}): Promise<void> {
    return new Promise((resolve, reject) => {
      const run = () => this.#runSet(command).then(resolve, reject)
      const command: SetCommand = { kind: 'set', text, urgent, sent: false, overtaken: false, run, reject }
      this.#enqueue(command)
    })
  }

  #enqueue(command: Command): void {
    if (this.#status !== 'open') {
      const closed = this.#status === 'closed'
      command.reject(
        closed ? new LineError('closed', 'The line is closed') : new LineError('lost', 'No line'),
      )
      return
    }
    if (command.urgent) {
      if (command.kind === 'set') this.#overtake()
      const behind = this.#queue.findIndex((queued) => !queued.urgent)
      this.#queue.splice(behind === -1 ? this.#queue.length : behind, 0, command)
      if (this.#synchronising) this.#sendUrgentSets()
    } else {
      this.#queue.push(command)
    }
    if (!this.#running) void this.#pump()
  }

  /** Makes void what was to be set before an urgent order, so that it does not undo it. */
  #overtake(): void {
    for (const command of [...this.#queue]) {
      if (command.kind !== 'set' || command.urgent) continue
      this.#queue.splice(this.#queue.indexOf(command), 1)
      command.reject(overtaken(command))
    }
    const running = this.#running
    if (running?.kind === 'set' && !running.urgent && !running.sent) running.overtaken = true
  }

  async #pump(): Promise<void> {
    for (;;) {
      this.#running = this.#status === 'open' ? (this.#queue.shift() ?? null) : null
      if (!this.#running) return
      await this.#running.run()
    }
  }

  async #runQuery<T extends NonNullable<unknown>>(text: string, parse: Parse<T>): Promise<T> {
    for (let attempt = 0; ; attempt++) {
      await this.#inStep()
      try {
        return await this.#ask(text, parse)
      } catch (error) {
        if (!isUnanswered(error) || attempt === retries) throw error
        this.counts.retries++
      }
    }
  }

  async #runSet(command: SetCommand): Promise<void> {
    if (command.urgent && this.#dialogue?.inDoubt) this.#send(command)
    await this.#inStep()
    if (command.overtaken) throw overtaken(command)
    const ahead = command.sent ? '' : `${command.text}\n`
    if (!command.sent) this.#unconfirmed++
    command.sent = true
    try {
      const entry = await this.#ask('SYST:ERR?', parseErrorEntry, ahead)
      if (entry.number === 0) return
      if (this.#unconfirmed === 1) await this.#emptyErrorQueue()
      throw new InstrumentRefusedError(entry.number, entry.text, command.text)
    } catch (error) {
      if (!isUnanswered(error)) throw error
      // Asked again, the queue would no longer hold the entry that was lost: its emptiness would prove nothing.
      throw new LineError('unconfirmed', `${command.text} was sent and not confirmed: ${error.message}`)
    } finally {
      this.#unconfirmed--
    }
  }

  async #emptyErrorQueue(): Promise<void> {
    try {
      for (let entry = 1; entry < maxErrorEntries; entry++) {
        if ((await this.#ask('SYST:ERR?', parseErrorEntry)).number === 0) return
      }
    } catch (error) {
      // The dialogue is in doubt now; getting in step empties the queue.
      if (!isUnanswered(error)) throw error
    }
  }

  #send(command: SetCommand): void {
    if (command.sent || !this.#dialogue) return
    command.sent = true
    this.#unconfirmed++
    this.#dialogue.send(`${command.text}\n`)
  }

  #sendUrgentSets(): void {
    for (const command of this.#queue) if (command.kind === 'set' && command.urgent) this.#send(command)
  }

  #ask<T extends NonNullable<unknown>>(text: string, parse: Parse<T>, ahead?: string): Promise<T> {
    if (!this.#dialogue) throw new LineError('lost', 'No line')
    return this.#dialogue.ask(text, parse, ahead)
  }

  /** Resolves when no late answer can come any more; gives the line up when the instrument is silent. */
  async #inStep(): Promise<void> {
    const dialogue = this.#dialogue
    if (!dialogue) throw new LineError('lost', 'No line')
    if (!dialogue.inDoubt) return
    this.#synchronising = true
    try {
      this.#sendUrgentSets()
      if (await dialogue.synchronise(() => this.#unconfirmed === 0)) return
    } finally {
      this.#synchronising = false
    }
    if (this.#greeting) await dialogue.flush(this.#greeting)
    const error = new LineError('lost', 'The instrument does not answer')
    if (this.#dialogue === dialogue) this.#keeper.giveUp(error.message)
    throw error
  }

  async #attach(port: SerialPortStream): Promise<void> {
    const dialogue = new Dialogue(port, { limitSeconds: this.#limitSeconds, counts: this.counts })
    this.#dialogue = dialogue
    this.#unconfirmed = 0
    // The line feed ends whatever a former connection left half sent.
    dialogue.send(`\n${this.#greeting}`)
    await this.#inStep()
    if (this.#dialogue !== dialogue) return
    this.#setStatus('open', null)
    if (!this.#running) void this.#pump()
  }

  #detach(status: 'lost' | 'closed', reason: string | null): void {
    const dialogue = this.#dialogue
    this.#dialogue = null
    const error = new LineError(status, reason ?? 'The line was closed')
    for (const command of this.#queue.splice(0)) command.reject(error)
    dialogue?.abort(error)
    this.#setStatus(status, reason)
  }

  #setStatus(status: PortStatus, reason: string | null): void {
    if (this.#status === status) return
    if (status === 'lost') this.counts.losses++
    this.#status = status
    for (const listener of this.#listeners) listener(status, reason)
  }
}

function overtaken(command: SetCommand): LineError {
  return new LineError('overtaken', `${command.text} was overtaken by an urgent command`)
}

export function createLine(options: LineOptions): Line {
  return new Line(options)
}
