/**
 * Linear algebra for a handful of unknowns. Matrices lie row by row in one array; sizes are the caller's to keep.
 */

/**
 * Turns a tall matrix into an upper triangle by reflections, in place, and the right-hand side with it: afterwards the
 * first `columns` rows of both hold R and Qᵀb, and the rest of b what no combination of columns can reach.
 *
 * Source: Golub and Van Loan, Matrix Computations, 5.2 (Householder).
 */
export function triangulate(matrix: Float64Array, rows: number, columns: number, right: Float64Array): void {
  for (let k = 0; k < Math.min(columns, rows - 1); k++) {
    let largest = 0
    for (let i = k; i < rows; i++) largest = Math.max(largest, Math.abs(matrix[i * columns + k] as number))
    if (largest === 0) continue
    let squares = 0
    for (let i = k; i < rows; i++) squares += ((matrix[i * columns + k] as number) / largest) ** 2
    const pivot = matrix[k * columns + k] as number
    const length = pivot > 0 ? -largest * Math.sqrt(squares) : largest * Math.sqrt(squares)
    const head = pivot - length
    // The mirror is (1, x₁/head, x₂/head, …), kept where the column was until the row is done.
    for (let i = k + 1; i < rows; i++) matrix[i * columns + k] = (matrix[i * columns + k] as number) / head
    const factor = -head / length
    for (let j = k + 1; j < columns; j++) {
      let sum = matrix[k * columns + j] as number
      for (let i = k + 1; i < rows; i++)
        sum += (matrix[i * columns + k] as number) * (matrix[i * columns + j] as number)
      sum *= factor
      matrix[k * columns + j] = (matrix[k * columns + j] as number) - sum
      for (let i = k + 1; i < rows; i++)
        matrix[i * columns + j] =
          (matrix[i * columns + j] as number) - sum * (matrix[i * columns + k] as number)
    }
    let sum = right[k] as number
    for (let i = k + 1; i < rows; i++) sum += (matrix[i * columns + k] as number) * (right[i] as number)
    sum *= factor
    right[k] = (right[k] as number) - sum
    for (let i = k + 1; i < rows; i++)
      right[i] = (right[i] as number) - sum * (matrix[i * columns + k] as number)
    matrix[k * columns + k] = length
    for (let i = k + 1; i < rows; i++) matrix[i * columns + k] = 0
  }
}

/** Solves Rx = b for an upper triangle without a zero on its diagonal; returns x. */
export function solveTriangle(
  triangle: Float64Array,
  size: number,
  right: ArrayLike<number>,
  x: Float64Array = new Float64Array(size),
): Float64Array {
  for (let i = size - 1; i >= 0; i--) {
    let sum = right[i] as number
    for (let j = i + 1; j < size; j++) sum -= (triangle[i * size + j] as number) * (x[j] as number)
    x[i] = sum / (triangle[i * size + i] as number)
  }
  return x
}

/** Solves Rᵀx = b; returns x. */
export function solveTransposed(
  triangle: Float64Array,
  size: number,
  right: ArrayLike<number>,
  x: Float64Array = new Float64Array(size),
): Float64Array {
  for (let i = 0; i < size; i++) {
    let sum = right[i] as number
    for (let j = 0; j < i; j++) sum -= (triangle[j * size + i] as number) * (x[j] as number)
    x[i] = sum / (triangle[i * size + i] as number)
  }
  return x
}

/** (RᵀR)⁻¹ of an upper triangle without a zero on its diagonal. */
export function inverseOfNormal(triangle: Float64Array, size: number): number[][] {
  const inverse = Array.from({ length: size }, () => new Array<number>(size).fill(0))
  const unit = new Float64Array(size)
  for (let j = 0; j < size; j++) {
    unit.fill(0)
    unit[j] = 1
    const column = solveTriangle(triangle, size, solveTransposed(triangle, size, unit))
    for (let i = 0; i < size; i++) (inverse[i] as number[])[j] = column[i] as number
  }
  // Rounding leaves the two halves a little different.
  for (let i = 0; i < size; i++) {
    for (let j = 0; j < i; j++) {
      const [row, other] = [inverse[i] as number[], inverse[j] as number[]]
      row[j] = other[i] = ((row[j] as number) + (other[i] as number)) / 2
    }
  }
  return inverse
}

/**
 * Ratio of the largest to the smallest singular value of an upper triangle whose columns are brought to unit length
 * first, so that it does not depend on the units of the unknowns. Infinity where a column is a combination of others.
 *
 * Source: one-sided Jacobi rotations (Hestenes), Golub and Van Loan, Matrix Computations, 8.6.
 */
export function conditionNumber(triangle: Float64Array, size: number): number {
  const columns: number[][] = []
  for (let j = 0; j < size; j++) {
    const column = Array.from({ length: size }, (_, i) => triangle[i * size + j] as number)
    const length = Math.hypot(...column)
    if (!(length > 0 && length < Number.POSITIVE_INFINITY)) return Number.POSITIVE_INFINITY
    columns.push(column.map((entry) => entry / length))
  }
  for (let sweep = 0; sweep < 40; sweep++) {
    let worst = 0
    for (let a = 0; a < size; a++) {
      for (let b = a + 1; b < size; b++) {
        worst = Math.max(worst, rotateApart(columns[a] as number[], columns[b] as number[]))
      }
    }
    if (worst < 1e-14) break
  }
  const lengths = columns.map((column) => Math.hypot(...column))
  const [largest, smallest] = [Math.max(...lengths), Math.min(...lengths)]
  return smallest > 1e-15 * largest ? largest / smallest : Number.POSITIVE_INFINITY
}

/** Turns two columns in their plane until they are at right angles; returns how far they were from that. */
function rotateApart(a: number[], b: number[]): number {
  let [aa, bb, ab] = [0, 0, 0]
  for (let i = 0; i < a.length; i++) {
    aa += (a[i] as number) ** 2
    bb += (b[i] as number) ** 2
    ab += (a[i] as number) * (b[i] as number)
  }
  const cosine = Math.abs(ab) / Math.sqrt(aa * bb)
  if (!(cosine > 1e-15)) return 0
  const slope = (bb - aa) / (2 * ab)
  const tangent = (slope >= 0 ? 1 : -1) / (Math.abs(slope) + Math.hypot(1, slope))
  const c = 1 / Math.hypot(1, tangent)
  const s = c * tangent
  for (let i = 0; i < a.length; i++) {
    const [x, y] = [a[i] as number, b[i] as number]
    a[i] = c * x - s * y
    b[i] = s * x + c * y
  }
  return cosine
}

/** Correlation coefficients of a covariance matrix with a positive diagonal. */
export function correlationsOf(covariance: readonly (readonly number[])[]): number[][] {
  return covariance.map((row, i) =>
    row.map((entry, j) => {
      if (i === j) return 1
      const scale = Math.sqrt((row[i] as number) * ((covariance[j] as number[])[j] as number))
      return Math.min(1, Math.max(-1, entry / scale))
    }),
  )
}
