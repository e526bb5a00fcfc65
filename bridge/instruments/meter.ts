import { parseNumbers } from './answers.ts'
import { Confirmed } from './confirmed.ts'
import { type InstrumentOptions, instrumentOf, lineOf } from './instrument-line.ts'
import { LineError } from './line-errors.ts'
import type { MeterProfile } from './profiles.ts'
import type { Meter } from './types.ts'

const toleranceOfRange = 0.02

/**
 * A meter of one quantity. `measure` resolves with null for out of range and for an answer that cannot be read, and
 * rejects with `LineError` when there was none.
 */
export function createMeter(options: InstrumentOptions & { profile: MeterProfile }): Meter {
  const { profile } = options
  const line = lineOf(options, { serial: profile.serial, limitSeconds: profile.timing.limitSeconds })
  const confirmed = new Confirmed([profile.range.maximum * toleranceOfRange])
  const ask = () => line.query(profile.measure, (answer) => parseNumbers(answer, 1))
  return Object.assign(instrumentOf(options.name, line), {
    async measure() {
      try {
        return (await confirmed.read(ask))[0] ?? null
      } catch (error) {
        if (error instanceof LineError && error.fault === 'unparsable') return null
        throw error
      }
    },
  })
}
