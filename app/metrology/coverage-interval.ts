import { solveTriangle, triangulate } from '#app/statistics/small-matrix.ts'

export type Interval = [low: number, high: number]

const GRID = 400
const HALF_WINDOW = 0.3
const TERMS = 4
/** With fewer candidates there is nothing to smooth. */
const LEAST_TO_SMOOTH = 100

/**
 * Sorts as many of the smallest and of the largest values to both ends as the intervals of a probability look at;
 * what lies between them stays unsorted.
 */
export function sortTails(values: Float64Array, probability: number): void {
  const tail = values.length - coveredCount(values, probability)
  if (4 * tail > values.length) {
    values.sort()
    return
  }
  partition(values, 0, tail)
  partition(values, tail, values.length - tail)
  values.subarray(0, tail).sort()
  values.subarray(values.length - tail).sort()
}

/** Moves the values from `start` on so that those before `place` are not above those after (Hoare's selection). */
function partition(values: Float64Array, start: number, place: number): void {
  let low = start
  let high = values.length - 1
  while (low < high) {
    const pivot = values[(low + high) >> 1] as number
    let i = low
    let j = high
    while (i <= j) {
      while ((values[i] as number) < pivot) i++
      while ((values[j] as number) > pivot) j--
      if (i > j) break
      const swapped = values[i] as number
      values[i++] = values[j] as number
      values[j--] = swapped
    }
    if (place <= j) high = j
    else if (place >= i) low = i
    else return
  }
}

/**
 * The interval with equal parts of the values below and above it.
 *
 * @param sorted ascending, at least 20; `sortTails` is enough
 *
 * Source: JCGM 101:2008, 7.7.1 and 7.7.2.
 */
export function symmetricInterval(sorted: Float64Array, probability: number): Interval {
  return intervalFrom(sorted, symmetricPlace(sorted, probability), probability)
}

/**
 * The shortest interval that holds the given part of the values.
 *
 * Of many intervals that are nearly as short the very shortest is chosen by chance: its place converges only as
 * the cube root of the number of values. The place is therefore where a cubic through the lengths about the
 * shortest has its least, unless the lengths contradict it. Where the symmetric interval is no longer, it is the
 * symmetric one.
 *
 * @param sorted ascending, at least 20; `sortTails` is enough
 *
 * Source: JCGM 101:2008, 7.7.3, but for the cubic.
 */
export function shortestInterval(sorted: Float64Array, probability: number): Interval {
  const covered = coveredCount(sorted, probability)
  const candidates = sorted.length - covered
  const lengthAt = (place: number): number => (sorted[place + covered] as number) - (sorted[place] as number)
  let shortest = 0
  for (let place = 1; place < candidates; place++) if (lengthAt(place) < lengthAt(shortest)) shortest = place
  let best = shortest
  if (candidates >= LEAST_TO_SMOOTH) {
    const smooth = smoothPlace(lengthAt, candidates, shortest)
    // Sum of exponential spacings at both ends.
    const noise =
      Math.hypot(
        (sorted[smooth] as number) - (sorted[shortest] as number),
        (sorted[smooth + covered] as number) - (sorted[shortest + covered] as number),
      ) / Math.sqrt(Math.max(1, Math.abs(smooth - shortest)))
    if (lengthAt(smooth) - lengthAt(shortest) <= 4 * noise) best = smooth
  }
  const symmetric = symmetricPlace(sorted, probability)
  return intervalFrom(sorted, lengthAt(symmetric) <= lengthAt(best) ? symmetric : best, probability)
}

/** q of JCGM 101: how many steps of the sorted values the interval spans. */
function coveredCount({ length }: Float64Array, probability: number): number {
  return Math.min(length - 1, Math.floor(probability * length + 0.5))
}

function symmetricPlace(sorted: Float64Array, probability: number): number {
  return Math.floor((sorted.length - coveredCount(sorted, probability) + 1) / 2) - 1
}

function intervalFrom(sorted: Float64Array, place: number, probability: number): Interval {
  return [sorted[place] as number, sorted[place + coveredCount(sorted, probability)] as number]
}

/**
 * The part below the interval is written sin²φ of what lies outside, which spreads both ends, where the lengths
 * run steeply. The window follows the least of its cubic a few times.
 */
function smoothPlace(lengthAt: (place: number) => number, candidates: number, start: number): number {
  const placeAt = (phi: number): number =>
    Math.min(candidates - 1, Math.floor(Math.sin(phi) ** 2 * candidates))
  const step = Math.PI / 2 / GRID
  let centre = Math.asin(Math.sqrt((start + 0.5) / candidates))
  for (let round = 0; round < 4; round++) {
    const first = Math.max(0, Math.ceil((centre - HALF_WINDOW) / step - 0.5))
    const last = Math.min(GRID - 1, Math.floor((centre + HALF_WINDOW) / step - 0.5))
    const rows = last - first + 1
    const powers = new Float64Array(rows * TERMS)
    const lengths = new Float64Array(rows)
    for (let i = 0; i < rows; i++) {
      const phi = (first + i + 0.5) * step
      const x = (phi - centre) / HALF_WINDOW
      powers.set([1, x, x * x, x * x * x], i * TERMS)
      lengths[i] = lengthAt(placeAt(phi))
    }
    triangulate(powers, rows, TERMS, lengths)
    const low = Math.max(0, centre - HALF_WINDOW)
    const high = Math.min(Math.PI / 2, centre + HALF_WINDOW)
    const cubic = solveTriangle(powers, TERMS, lengths)
    centre += HALF_WINDOW * leastOfCubic(cubic, (low - centre) / HALF_WINDOW, (high - centre) / HALF_WINDOW)
  }
  return placeAt(centre)
}

function leastOfCubic(coefficients: ArrayLike<number>, low: number, high: number): number {
  const [, b = 0, c = 0, d = 0] = Array.from(coefficients)
  const at = (x: number): number => x * (b + x * (c + x * d))
  let least = at(low) <= at(high) ? low : high
  const discriminant = c * c - 3 * b * d
  if (discriminant >= 0) {
    // The root with positive curvature, in the form that does not cancel.
    const root = Math.sqrt(discriminant)
    const turn = c > 0 ? -b / (c + root) : (root - c) / (3 * d)
    if (turn > low && turn < high && at(turn) < at(least)) least = turn
  }
  return least
}
