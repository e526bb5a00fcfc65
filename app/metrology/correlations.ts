export type Correlation = { a: string; b: string; r: number }

/** The same by the places of the two inputs in the list of names. */
export type CorrelatedPair = { a: number; b: number; r: number }

/**
 * Correlations by the places of their inputs.
 *
 * @throws RangeError naming `correlations`: for a name that is none, an input with itself, a coefficient
 *   outside −1 to 1, a pair that stands twice, and coefficients that no joint distribution has
 */
export function correlatedPairs(
  names: readonly string[],
  correlations: readonly Correlation[],
): CorrelatedPair[] {
  const seen = new Set<string>()
  const pairs = correlations.map(({ a, b, r }) => {
    const [i, j] = [names.indexOf(a), names.indexOf(b)]
    if (i < 0 || j < 0) throw new RangeError(`correlations must name inputs, got ${a} and ${b}`)
    if (i === j) throw new RangeError(`correlations must be between two inputs, got ${a} twice`)
    if (!(Math.abs(r) <= 1)) throw new RangeError(`correlations must lie between -1 and 1, got ${r}`)
    const key = `${Math.min(i, j)} ${Math.max(i, j)}`
    if (seen.has(key)) throw new RangeError(`correlations must hold each pair once, got ${a} and ${b} again`)
    seen.add(key)
    return { a: i, b: j, r }
  })
  if (pairs.length > 1) correlationFactor(names.length, pairs)
  return pairs
}

/**
 * The lower triangle L with LLᵀ = the matrix of correlations (Cholesky), row by row: L times independent
 * numbers of unit variance gives numbers with these correlations. A matrix that leaves nothing over in some
 * row, as r = ±1 does, has a zero on the diagonal there.
 *
 * @throws RangeError naming `correlations` that are impossible together, which leave a negative pivot
 */
export function correlationFactor(size: number, pairs: readonly CorrelatedPair[]): Float64Array {
  const factor = new Float64Array(size * size)
  const at = (i: number, j: number): number => factor[i * size + j] as number
  for (let i = 0; i < size; i++) factor[i * size + i] = 1
  for (const { a, b, r } of pairs) factor[Math.max(a, b) * size + Math.min(a, b)] = r
  for (let column = 0; column < size; column++) {
    let pivot = at(column, column)
    for (let k = 0; k < column; k++) pivot -= at(column, k) ** 2
    if (pivot < -1e-9) throw impossible()
    const root = Math.sqrt(Math.max(0, pivot))
    factor[column * size + column] = pivot > 1e-12 ? root : 0
    for (let i = column + 1; i < size; i++) {
      let below = at(i, column)
      for (let k = 0; k < column; k++) below -= at(i, k) * at(column, k)
      if (pivot <= 1e-12 && Math.abs(below) > 1e-6) throw impossible()
      factor[i * size + column] = pivot > 1e-12 ? below / root : 0
    }
  }
  return factor
}

function impossible(): RangeError {
  return new RangeError('correlations must be possible together (positive semi-definite)')
}
