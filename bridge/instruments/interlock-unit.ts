import { parseBooleans } from './answers.ts'
import { type InstrumentOptions, instrumentOf, lineOf } from './instrument-line.ts'
import { LineError } from './line-errors.ts'
import type { InterlockProfile } from './profiles.ts'
import type { InterlockReading, InterlockUnit } from './types.ts'

/** The same contacts twice in one answer: 0 and 1 differ by one bit, and an open contact must not be read as closed. */
function parseTwice(answer: string): InterlockReading | null {
  const [first, second, ...more] = answer.split(';').map((part) => parseBooleans(part, 2))
  if (!first || !second || more.length > 0) return null
  const [eStopOut, enclosureClosed] = first
  if (eStopOut === undefined || enclosureClosed === undefined) return null
  if (eStopOut !== second[0] || enclosureClosed !== second[1]) return null
  return { eStopOut, enclosureClosed }
}

/**
 * The unit that watches e-stop and enclosure. `measure` resolves with null for an answer that cannot be read, and
 * rejects with `LineError` when there was none.
 */
export function createInterlockUnit(
  options: InstrumentOptions & { profile: InterlockProfile },
): InterlockUnit {
  const { profile } = options
  const line = lineOf(options, { serial: profile.serial, limitSeconds: profile.timing.limitSeconds })
  return Object.assign(instrumentOf(options.name, line), {
    async measure() {
      try {
        return await line.query(`${profile.state};:${profile.state}`, parseTwice)
      } catch (error) {
        if (error instanceof LineError && error.fault === 'unparsable') return null
        throw error
      }
    },
  })
}
