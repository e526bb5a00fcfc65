import { errorText, eventBitOf, eventBits } from './errors.ts'

const queueDepth = 10

/** Bits of the status byte: IEEE 488.2 clause 11.2, SCPI-1999 volume 1 chapter 9. */
export const statusBits = {
  errorAvailable: 4,
  questionable: 8,
  messageAvailable: 16,
  eventSummary: 32,
  masterSummary: 64,
  operation: 128,
} as const

/** First in, first out. When it is full the newest entry becomes -350 and the older ones stay. */
export class ErrorQueue {
  readonly #entries: { code: number; detail: string | undefined }[] = []

  get length(): number {
    return this.#entries.length
  }

  push(code: number, detail?: string): void {
    if (this.#entries.length < queueDepth) this.#entries.push({ code, detail })
    else this.#entries[queueDepth - 1] = { code: -350, detail: undefined }
  }

  /** Removes the oldest entry and gives it as text; `0,"No error"` when empty. */
  next(): string {
    const entry = this.#entries.shift()
    return entry ? errorText(entry.code, entry.detail) : errorText(0)
  }

  clear(): void {
    this.#entries.length = 0
  }
}

/** A SCPI condition, event and enable register; the event latches where a condition bit rises. */
export class ConditionRegister {
  condition = 0
  event = 0
  enable = 0

  update(condition: number): void {
    this.event |= condition & ~this.condition
    this.condition = condition
  }

  takeEvent(): number {
    const event = this.event
    this.event = 0
    return event
  }

  get summary(): boolean {
    return (this.event & this.enable) !== 0
  }
}

/** All status of one instrument. Starts as after power-on, with the power-on bit set. */
export class Status {
  readonly errors = new ErrorQueue()
  readonly operation = new ConditionRegister()
  readonly questionable = new ConditionRegister()
  eventEnable = 0
  requestEnable = 0
  #event: number = eventBits.powerOn

  report(code: number, detail?: string): void {
    this.errors.push(code, detail)
    this.#event |= eventBitOf(code)
  }

  completeOperation(): void {
    this.#event |= eventBits.operationComplete
  }

  takeEvent(): number {
    const event = this.#event
    this.#event = 0
    return event
  }

  /** The status byte with the master summary in bit 6. */
  byte(messageAvailable: boolean): number {
    let byte = 0
    if (this.errors.length > 0) byte |= statusBits.errorAvailable
    if (this.questionable.summary) byte |= statusBits.questionable
    if (messageAvailable) byte |= statusBits.messageAvailable
    if ((this.#event & this.eventEnable) !== 0) byte |= statusBits.eventSummary
    if (this.operation.summary) byte |= statusBits.operation
    if ((byte & this.requestEnable) !== 0) byte |= statusBits.masterSummary
    return byte
  }

  /** *CLS: events and errors go, the enable registers stay. */
  clear(): void {
    this.errors.clear()
    this.#event = 0
    this.operation.event = 0
    this.questionable.event = 0
  }

  /** STATus:PRESet: the enables of the SCPI registers, not those of IEEE 488.2. */
  preset(): void {
    this.operation.enable = 0
    this.questionable.enable = 0
  }
}
