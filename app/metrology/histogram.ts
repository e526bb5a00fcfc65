/** Bins of equal width from `low` to `high`, and how many values lie outside. */
export type Histogram = { low: number; high: number; counts: number[]; below: number; above: number }

const BINS = 80
const DEVIATIONS = 4

/** An empty histogram that reaches four standard deviations to both sides of the mean. */
export function histogramAbout(mean: number, standardDeviation: number): Histogram {
  const reach = DEVIATIONS * standardDeviation || 1e-6 * Math.abs(mean) || 1e-6
  return { low: mean - reach, high: mean + reach, counts: new Array(BINS).fill(0), below: 0, above: 0 }
}

/** Counts the values into the histogram. */
export function countInto(histogram: Histogram, values: Float64Array): void {
  const { low, high, counts } = histogram
  const perBin = counts.length / (high - low)
  for (let i = 0; i < values.length; i++) {
    const value = values[i] as number
    if (value < low) histogram.below++
    else if (value > high) histogram.above++
    else {
      const bin = Math.min(counts.length - 1, Math.floor((value - low) * perBin))
      counts[bin] = (counts[bin] as number) + 1
    }
  }
}
