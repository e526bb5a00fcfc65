import type { Trace } from '#app/telemetry/ring-buffer.ts'

export type Range = readonly [low: number, high: number]

type Input = {
  trace: Trace
  /** Seconds before now that the range is taken from, once the setpoint stands; null takes all that is visible. */
  steadySeconds: number | null
  /** The tolerance of a settled channel, in its unit. */
  tolerance: number
}

const deviations = 6

/**
 * The range of values that a strip shows: all that is visible while the setpoint moves; once it stands, mean ± 6
 * standard deviations of the window, at least ± the tolerance, so that noise and drift can be seen.
 */
export function stripRange({ trace, steadySeconds, tolerance }: Input): Range {
  const values = valuesOf(trace, steadySeconds)
  if (values.length === 0) return [0, tolerance * 2]
  if (steadySeconds === null) {
    const low = values.reduce((least, value) => Math.min(least, value), Number.POSITIVE_INFINITY)
    const high = values.reduce((most, value) => Math.max(most, value), Number.NEGATIVE_INFINITY)
    return around((low + high) / 2, Math.max((high - low) * 0.55, tolerance * 4))
  }
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length
  const squares = values.reduce((sum, value) => sum + (value - mean) ** 2, 0)
  const deviation = Math.sqrt(squares / Math.max(1, values.length - 1))
  return around(mean, Math.max(deviations * deviation, tolerance))
}

/** The range shown until now, as long as it still fits: a strip whose axis moves with every sample cannot be read. */
export function heldRange(held: Range | null, wanted: Range): Range {
  if (held === null) return wanted
  const [heldHalf, wantedHalf] = [half(held), half(wanted)]
  const isOff = Math.abs(middle(held) - middle(wanted)) > heldHalf / 3
  return isOff || wantedHalf > heldHalf * 1.2 || wantedHalf < heldHalf / 2 ? wanted : held
}

const around = (centre: number, reach: number): Range => [centre - reach, centre + reach]
const middle = ([low, high]: Range) => (low + high) / 2
const half = ([low, high]: Range) => (high - low) / 2

function valuesOf({ seconds, values }: Trace, since: number | null): number[] {
  return values.filter((value, i): value is number => {
    return value !== null && (since === null || (seconds[i] ?? Number.NEGATIVE_INFINITY) >= -since)
  })
}
