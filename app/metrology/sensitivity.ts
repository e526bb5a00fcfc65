/** A step this far in, the error estimate of the extrapolation has passed its least value. */
const MOST_COLUMNS = 12
const STEP_RATIO = 1.6
const GOOD_ENOUGH = 1e-11

export type Derivative = { value: number; error: number }

/**
 * First derivative of a function by central differences, extrapolated to step zero (Ridders). Several
 * first steps are tried, from wide to narrow, and the result with the least estimated error is taken, so
 * that neither the scale of the input nor that of the function has to be known.
 *
 * @param f may return a number that is not finite, or throw, where it has no value: the step shrinks
 * @param scale a distance over which f changes noticeably, above 0
 * @returns the derivative with its estimated error, or null where no step gave one
 */
export function derivative(f: (x: number) => number, x: number, scale: number): Derivative | null {
  const best = { value: Number.NaN, error: Number.POSITIVE_INFINITY }
  let first = scale
  for (let attempt = 0; attempt < 12; attempt++) {
    const errorBefore = best.error
    const isTried = improve(best, f, x, first)
    if (isGoodEnough(best)) break
    if (isTried && best.error === errorBefore && attempt > 3) break
    first /= 8
  }
  return best.error < Number.POSITIVE_INFINITY ? best : null
}

function isGoodEnough({ value, error }: Derivative): boolean {
  return error <= GOOD_ENOUGH * Math.abs(value)
}

/** Puts a better result of steps from `first` down into `best`; returns whether there was any result. */
function improve(best: Derivative, f: (x: number) => number, x: number, first: number): boolean {
  const row: number[] = []
  let leastError = Number.POSITIVE_INFINITY
  let step = first
  for (let column = 0; column < MOST_COLUMNS; column++) {
    const above = x + step
    const below = x - step
    if (above === below) break
    let current = (evaluate(f, above) - evaluate(f, below)) / (above - below)
    if (!Number.isFinite(current)) break
    // The row holds the extrapolations from the steps before; each is replaced once it has been used.
    const diagonal = row[column - 1] as number
    let factor = STEP_RATIO * STEP_RATIO
    for (let order = 0; order < column; order++) {
      const coarse = row[order] as number
      const next = (current * factor - coarse) / (factor - 1)
      factor *= STEP_RATIO * STEP_RATIO
      const error = Math.max(Math.abs(next - current), Math.abs(next - coarse))
      if (error < leastError) leastError = error
      if (error < best.error) {
        best.value = next
        best.error = error
      }
      row[order] = current
      current = next
    }
    row[column] = current
    if (isGoodEnough(best)) return true
    if (column > 0 && Math.abs(current - diagonal) > 2 * leastError) break
    step /= STEP_RATIO
  }
  return leastError < Number.POSITIVE_INFINITY
}

function evaluate(f: (x: number) => number, x: number): number {
  try {
    return f(x)
  } catch (error) {
    if (error instanceof RangeError) return Number.NaN
    throw error
  }
}
