/** A step this far in, the error estimate of the extrapolation has passed its least value. */
const MOST_COLUMNS = 12
const STEP_RATIO = 1.6
const GOOD_ENOUGH = 1e-11

/**
 * First derivative of a function by central differences, extrapolated to step zero (Ridders). Several
 * first steps are tried, from wide to narrow, and the result with the least estimated error is taken, so
 * that neither the scale of the input nor that of the function has to be known.
 *
 * @param f may return a number that is not finite, or throw, where it has no value: the step shrinks
 * @param scale a distance over which f changes noticeably, above 0
 * @returns the derivative with its estimated error, or null where no step gave one
 */
export function derivative(
  f: (x: number) => number,
  x: number,
  scale: number,
): { value: number; error: number } | null {
  let best: { value: number; error: number } | null = null
  let first = scale
  for (let attempt = 0; attempt < 12; attempt++) {
    const found = ridders(f, x, first)
    if (found && (best === null || found.error < best.error)) best = found
    if (best && best.error <= GOOD_ENOUGH * Math.abs(best.value)) break
    if (found && best !== found && attempt > 3) break
    first /= 8
  }
  return best
}

function ridders(
  f: (x: number) => number,
  x: number,
  first: number,
): { value: number; error: number } | null {
  let previous: number[] = []
  let best: { value: number; error: number } | null = null
  let step = first
  for (let column = 0; column < MOST_COLUMNS; column++) {
    const above = x + step
    const below = x - step
    if (above === below) break
    const difference = (evaluate(f, above) - evaluate(f, below)) / (above - below)
    if (!Number.isFinite(difference)) return best
    const row = [difference]
    let factor = STEP_RATIO * STEP_RATIO
    for (let order = 1; order <= column; order++) {
      const coarse = previous[order - 1] as number
      const fine = row[order - 1] as number
      const next = (fine * factor - coarse) / (factor - 1)
      factor *= STEP_RATIO * STEP_RATIO
      row.push(next)
      const error = Math.max(Math.abs(next - fine), Math.abs(next - coarse))
      if (best === null || error < best.error) best = { value: next, error }
    }
    const last = row[column] as number
    const diagonal = previous[column - 1]
    if (best && diagonal !== undefined && Math.abs(last - diagonal) > 2 * best.error) break
    previous = row
    step /= STEP_RATIO
  }
  return best
}

function evaluate(f: (x: number) => number, x: number): number {
  try {
    return f(x)
  } catch (error) {
    if (error instanceof RangeError) return Number.NaN
    throw error
  }
}
