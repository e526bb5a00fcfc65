import { leastSamples, type Stability } from '#app/analysis/stability.ts'
import { thinSpace } from '../figures.ts'

export type Taken = {
  label: string
  unit: string
  seconds: number
  samples: number
  /** How long ago the stretch ended, in seconds: a channel may have gone since. */
  endedAgo: number
  stability: Stability | null
}

/** A unit with the prefix that brings a size between 1 and 1000, and by what to multiply; °C has none. */
export function withPrefix(size: number, unit: string): { unit: string; factor: number } {
  if (!unit.startsWith('°') && size > 0)
    for (const [prefix, factor] of [
      ['', 1],
      ['m', 1e3],
      ['µ', 1e6],
      ['n', 1e9],
    ] as const)
      if (size * factor >= 1) return { unit: prefix + unit, factor }
  return { unit, factor: 1 }
}

const digits = (value: number, count = 2) => String(Number(value.toPrecision(count)))

/** What a stretch of a channel says of averaging and drift, or how long to wait for one that says something. */
export function stabilitySentences({ label, unit, seconds, samples, endedAgo, stability }: Taken): string[] {
  if (!stability) {
    const wait =
      samples > 1 ? Math.ceil(Number((((leastSamples - samples) * seconds) / samples).toFixed(3))) : null
    const have = samples === 1 ? 'There is 1 sample' : `There are ${samples} samples`
    return [
      `${have} without a gap, and at least ${leastSamples} are needed${wait ? `: wait ${wait}${thinSpace}s more` : ''}.`,
    ]
  }
  const { best, driftFromSeconds, slopePerMinute, trend } = stability
  const size = (value: number) => {
    const shown = withPrefix(value, unit)
    return `${digits(value * shown.factor)}${thinSpace}${shown.unit}`
  }
  const old = endedAgo > 5 ? `, which ended ${endedAgo.toFixed(0)}${thinSpace}s ago` : ''
  const taken = `${seconds.toFixed(0)}${thinSpace}s of the ${label}, ${samples} samples${old}.`
  if (best.deviation === 0)
    return [taken, 'Its last digit does not move: the resolution of the meter is all there is.']
  const isLongest = best === stability.curve.at(-1)
  return [
    `${taken} It is steadiest averaged over ${digits(best.seconds)}${thinSpace}s: two such means differ by about ${size(best.deviation * Math.SQRT2)}.`,
    driftFromSeconds === null
      ? `Within this record more averaging does no harm${isLongest ? '; a longer one may tell where drift takes over' : ''}.`
      : `Averaged over ${digits(driftFromSeconds)}${thinSpace}s or longer, drift takes over.`,
    trend.p < 0.01
      ? `It ${slopePerMinute > 0 ? 'rises' : 'falls'} by ${size(Math.abs(slopePerMinute))} a minute (p ${trend.p < 0.0001 ? 'below 0.0001' : `= ${trend.p.toFixed(4)}`}).`
      : `No trend is told from chance (p = ${trend.p.toFixed(2)}).`,
  ]
}
