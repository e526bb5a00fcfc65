import type { SerialPortStream } from '@serialport/stream'
import { parseNumbers } from './answers.ts'
import { type BoundedLines, readLines } from './bounded-lines.ts'
import { isUnanswered, LineError } from './line-errors.ts'

const maxLineBytes = 512
// How long a try at getting in step waits for its token, and how long all tries together may take.
const tokenSeconds = 0.5
const synchroniseSeconds = 1
// After a line that is no answer the right one may still come; not for long, so that a damaged answer costs little.
const quietSeconds = 0.05
const flushSeconds = 0.05

export type LineCounts = { retries: number; rubbishLines: number; synchronisations: number; losses: number }

/** Makes a value of an answer's text, or null of text that is no answer to what was asked. */
export type Parse<T extends NonNullable<unknown>> = (answer: string) => T | null

/**
 * Questions and answers over one open port, one question at a time.
 *
 * An answer is taken only when it belongs to its question: each question ends in one to three `*OPC?`, in turn, and its
 * answer in as many `;1`. A question without an answer leaves the dialogue in doubt: answers may still come late. Then
 * `synchronise` brings it in step. Lines that fit nothing are counted and dropped.
 */
export class Dialogue {
  /** Whether answers to older questions may still come. */
  inDoubt = true
  readonly #port: SerialPortStream
  readonly #limitSeconds: number
  readonly #counts: LineCounts
  readonly #lines: BoundedLines
  #onLine: ((line: string) => void) | null = null
  #abort: ((error: Error) => void) | null = null
  #sequence = 0
  #tokens = 0

  constructor(port: SerialPortStream, options: { limitSeconds: number; counts: LineCounts }) {
    this.#port = port
    this.#limitSeconds = options.limitSeconds
    this.#counts = options.counts
    this.#lines = readLines(port, {
      maxBytes: maxLineBytes,
      onLine: (line) => {
        if (this.#onLine) this.#onLine(line)
        else this.#counts.rubbishLines++
      },
      onSpoiled: () => this.#counts.rubbishLines++,
    })
  }

  send(text: string): void {
    this.#port.write(text, 'latin1')
  }

  /** Sends, and waits a moment for the bytes to leave: a port that is closed at once may drop them. */
  flush(text: string): Promise<void> {
    return new Promise((resolve) => {
      const timer = setTimeout(resolve, flushSeconds * 1000)
      this.#port.write(text, 'latin1', () => {
        clearTimeout(timer)
        resolve()
      })
    })
  }

  /** Ends the question in flight with this error. */
  abort(error: Error): void {
    this.#abort?.(error)
  }

  /** Asks once. `ahead` is sent before the question in the same write. Rejects with `LineError`. */
  async ask<T extends NonNullable<unknown>>(text: string, parse: Parse<T>, ahead = ''): Promise<T> {
    this.#sequence = (this.#sequence + 1) % 3
    const count = this.#sequence + 1
    const tail = ';1'.repeat(count)
    const own = (line: string) => {
      const answer = line.slice(0, -tail.length)
      return line.endsWith(tail) && !answer.endsWith(';1') ? parse(answer) : null
    }
    try {
      return await this.#exchange(`${ahead}${text}${';*OPC?'.repeat(count)}\n`, own, this.#limitSeconds)
    } catch (error) {
      if (isUnanswered(error)) this.inDoubt = true
      throw error
    }
  }

  /**
   * Waits until a token, written to the event enable register and read back, has come through: a line keeps its order, so
   * nothing older can follow. Resolves with whether one has. `mayClear` tells whether the error queue may be emptied.
   */
  async synchronise(mayClear: () => boolean): Promise<boolean> {
    this.#counts.synchronisations++
    const tokens = new Set<number>()
    const isToken = (line: string) => {
      const [one, first, second] = parseNumbers(line.replaceAll(';', ','), 3) ?? []
      return one === 1 && typeof first === 'number' && first === second && tokens.has(first) ? true : null
    }
    const end = performance.now() + synchroniseSeconds * 1000
    for (;;) {
      const left = (end - performance.now()) / 1000
      if (left <= 0) return false
      // Never 1, so that the answer does not end as that to a question does.
      const token = 2 + (this.#tokens++ % 250)
      tokens.add(token)
      const text = `${mayClear() ? '*CLS;' : ''}*ESE ${token};*OPC?;*ESE?;*ESE?\n`
      try {
        await this.#exchange(text, isToken, Math.min(tokenSeconds, left))
        this.inDoubt = false
        return true
      } catch (error) {
        if (!isUnanswered(error)) throw error
      }
    }
  }

  /** Writes, and resolves with the first line that `accept` makes something of. Rejects with `LineError`. */
  #exchange<T extends NonNullable<unknown>>(text: string, accept: Parse<T>, seconds: number): Promise<T> {
    return new Promise((resolve, reject) => {
      let rubbish = false
      let quiet: NodeJS.Timeout | undefined
      const settle = () => {
        clearTimeout(deadline)
        clearTimeout(quiet)
        this.#onLine = null
        this.#abort = null
      }
      const abort = (error: Error) => {
        settle()
        reject(error)
      }
      const fail = () => {
        const asked = text.trim()
        if (rubbish) abort(new LineError('unparsable', `No answer to ${asked} that can be read`))
        else abort(new LineError('timeout', `No answer to ${asked} within ${seconds} s`))
      }
      const deadline = setTimeout(fail, seconds * 1000)
      this.#abort = abort
      this.#onLine = (line) => {
        const value = accept(line)
        if (value !== null) {
          settle()
          resolve(value)
          return
        }
        rubbish = true
        this.#counts.rubbishLines++
        clearTimeout(quiet)
        quiet = setTimeout(fail, quietSeconds * 1000)
      }
      this.#lines.endPartialLine()
      this.send(text)
    })
  }
}
