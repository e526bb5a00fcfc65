/** Mean and standard deviation of a handful of readings. */
export function moments(values: readonly number[]): { mean: number; deviation: number } {
  const mean = values.reduce((sum, value) => sum + value, 0) / values.length
  const squares = values.reduce((sum, value) => sum + (value - mean) ** 2, 0)
  return { mean, deviation: Math.sqrt(squares / (values.length - 1)) }
}
