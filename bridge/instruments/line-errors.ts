/**
 * Why a command over a line came to nothing. `timeout`: no answer in time. `unparsable`: only answers that cannot be
 * read. `unconfirmed`: a set was sent, and whether the instrument took it is not known. `overtaken`: a set that an
 * urgent one made void before it was sent. `lost`, `closed`: there is no line.
 */
export type LineFault = 'timeout' | 'unparsable' | 'unconfirmed' | 'overtaken' | 'lost' | 'closed'

export class LineError extends Error {
  override readonly name = 'LineError'
  readonly fault: LineFault

  constructor(fault: LineFault, message: string) {
    super(message)
    this.fault = fault
  }
}

/** The instrument took the command and refused it: an entry of its error queue (SCPI-1999 volume 2, 21.8). */
export class InstrumentRefusedError extends Error {
  override readonly name = 'InstrumentRefusedError'
  readonly number: number
  readonly text: string
  readonly command: string

  constructor(number: number, text: string, command: string) {
    super(`${command} refused: ${number} ${text}`)
    this.number = number
    this.text = text
    this.command = command
  }
}

/** Whether a query was put and no usable answer came, over a line that still stands. */
export function isUnanswered(error: unknown): error is LineError {
  return error instanceof LineError && (error.fault === 'timeout' || error.fault === 'unparsable')
}
