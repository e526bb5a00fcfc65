import { type AllanPoint, allanCurve } from '#app/statistics/allan.ts'
import { type MannKendall, mannKendall, theilSen } from '#app/statistics/trend.ts'

/** A stretch of one channel without a gap, at a steady interval. */
export type Stretch = { values: number[]; intervalSeconds: number }
/** With the moment of its last value, on the clock of the trace; null where it is empty. */
export type EndedStretch = Stretch & { endSeconds: number | null }

export type Stability = {
  curve: AllanPoint[]
  /** the averaging at which the deviation is least */
  best: AllanPoint
  /** from this averaging time on more averaging makes it worse; null where the record does not reach there */
  driftFromSeconds: number | null
  /** median slope, in the channel's unit a minute */
  slopePerMinute: number
  trend: MannKendall
}

/** A record needs so many samples to say anything of averaging. */
export const leastSamples = 100
/** The trend is told from at most so many means, so that the noise's memory does not count as a trend. */
const mostBlocks = 60
/** A sample that comes later than so many intervals is one after a gap. */
const gapIntervals = 2.5

/**
 * The newest stretch of a trace without a gap: null values and longer pauses end it.
 *
 * @param trace.seconds ascending
 */
export function newestStretch(trace: {
  seconds: readonly number[]
  values: readonly (number | null)[]
}): EndedStretch {
  const { seconds, values } = trace
  const steps: number[] = []
  for (let i = 1; i < seconds.length; i++) steps.push((seconds[i] as number) - (seconds[i - 1] as number))
  steps.sort((a, b) => a - b)
  const intervalSeconds = steps[steps.length >> 1] ?? 0
  const stretch: number[] = []
  let endSeconds: number | null = null
  for (let i = seconds.length - 1; i >= 0; i--) {
    const value = values[i]
    if (value === null || value === undefined) {
      if (stretch.length > 0) break
      continue
    }
    const isGap =
      stretch.length > 0 &&
      (seconds[i + 1] as number) - (seconds[i] as number) > gapIntervals * intervalSeconds
    if (isGap) break
    endSeconds ??= seconds[i] as number
    stretch.push(value)
  }
  return { values: stretch.reverse(), intervalSeconds, endSeconds }
}

/**
 * How long a channel is best averaged, and whether it drifts: the overlapping Allan deviation, and a test for a trend on the
 * means of blocks.
 *
 * @throws RangeError naming `values` (fewer than `leastSamples`, not finite) or `intervalSeconds`
 */
export function judgeStability({ values, intervalSeconds }: Stretch): Stability {
  if (values.length < leastSamples)
    throw new RangeError(`values must be at least ${leastSamples}, got ${values.length}`)
  const curve = allanCurve(values, intervalSeconds)
  const best = curve.reduce((least, point) => (point.deviation < least.deviation ? point : least))
  const after = curve.find(
    (point) =>
      point.m > best.m &&
      point.deviation - point.standardUncertainty > best.deviation + best.standardUncertainty,
  )
  const size = Math.max(
    Math.ceil(values.length / mostBlocks),
    Math.min(best.m, Math.floor(values.length / 12)),
    1,
  )
  const blocks = blockMeans(values, size)
  return {
    curve,
    best,
    driftFromSeconds: after?.seconds ?? null,
    slopePerMinute: (theilSen(blocks) / (size * intervalSeconds)) * 60,
    trend: mannKendall(blocks),
  }
}

function blockMeans(values: readonly number[], size: number): number[] {
  const first = values[0] as number
  return Array.from({ length: Math.floor(values.length / size) }, (_, block) => {
    let sum = 0
    for (let i = block * size; i < (block + 1) * size; i++) sum += (values[i] as number) - first
    return first + sum / size
  })
}
