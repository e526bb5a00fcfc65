import { Transform, type TransformCallback } from 'node:stream'
import { ReadlineParser } from '@serialport/parser-readline'
import type { SerialPortStream } from '@serialport/stream'

const lineFeed = 10
// NUL is in no answer of an instrument: it marks a line that was cut and is to be dropped.
const spoiled = Buffer.from([0])
const spoiledEnd = Buffer.from([0, lineFeed])

/** Passes bytes on, but never more than `maxBytes` of one line: the rest is dropped, and the line marked as spoiled. */
export class BoundedLines extends Transform {
  readonly #maxBytes: number
  #length = 0

  constructor(maxBytes: number) {
    super()
    this.#maxBytes = maxBytes
  }

  /** Ends a line of which only a part has come, so that it cannot run into the answer to what is asked next. */
  endPartialLine(): void {
    if (this.#length === 0) return
    this.#length = 0
    this.push(spoiledEnd)
  }

  override _transform(chunk: Buffer, _encoding: BufferEncoding, done: TransformCallback): void {
    let start = 0
    while (start < chunk.length) {
      const feed = chunk.indexOf(lineFeed, start)
      const end = feed === -1 ? chunk.length : feed
      const taken = Math.min(end - start, Math.max(0, this.#maxBytes - this.#length))
      if (taken > 0) this.push(chunk.subarray(start, start + taken))
      if (taken < end - start && this.#length <= this.#maxBytes) {
        this.push(spoiled)
        this.#length = this.#maxBytes + 1
      } else if (this.#length <= this.#maxBytes) {
        this.#length += taken
      }
      if (feed !== -1) {
        this.push(chunk.subarray(feed, feed + 1))
        this.#length = 0
      }
      start = end + 1
    }
    done()
  }
}

/** Reads the lines of a port: without line ends, without spoiled lines, one character a byte. */
export function readLines(
  port: SerialPortStream,
  options: { maxBytes: number; onLine: (line: string) => void; onSpoiled: () => void },
): BoundedLines {
  const bounded = new BoundedLines(options.maxBytes)
  const lines = port.pipe(bounded).pipe(new ReadlineParser({ delimiter: '\n', encoding: 'latin1' }))
  lines.on('data', (line: string) => {
    if (line.includes('\0')) options.onSpoiled()
    else options.onLine(line.endsWith('\r') ? line.slice(0, -1) : line)
  })
  return bounded
}
