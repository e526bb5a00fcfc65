import { requireFinite } from './domain.ts'

export type CircleFit = {
  centreX: number
  centreY: number
  radius: number
  /** from s²(JᵀJ)⁻¹ with s² = Σ residual²/(n − 3); null for three points */
  centreXError: number | null
  centreYError: number | null
  radiusError: number | null
  /** √(Σ residual²/n) */
  rms: number
  /** distance from the centre less the radius, a point each */
  residuals: number[]
  /** angle that the points span about the centre, in radians */
  arcRadians: number
  /** where the points span less than a third of the circle, so that radius and centre hang together */
  warning: string | null
}

const MOST_ITERATIONS = 1000
const CONVERGED = 1e-14
const SHORT_ARC_RADIANS = (2 * Math.PI) / 3
/** Points whose circle is so much larger than they spread lie on a line. */
const COLLINEAR = 1e6

/**
 * A circle through points by geometric least squares: the sum of the squared distances from the circle is least. Starts
 * from Taubin's algebraic fit. A short arc is fitted and comes with a warning.
 *
 * @param points at least three, not on one line
 * @throws RangeError naming `points`
 *
 * Sources: G. Taubin, IEEE Transactions on Pattern Analysis and Machine Intelligence 13 (1991) 1115; N. Chernov, Circular
 * and Linear Regression (2010), chapters 4 and 5.
 */
export function fitCircle(points: readonly { x: number; y: number }[]): CircleFit {
  points.forEach(({ x, y }, i) => {
    requireFinite(`points[${i}].x`, x)
    requireFinite(`points[${i}].y`, y)
  })
  if (points.length < 3)
    throw new RangeError(`points must be at least three for a circle, got ${points.length}`)
  const count = points.length
  const meanX = points.reduce((total, { x }) => total + x, 0) / count
  const meanY = points.reduce((total, { y }) => total + y, 0) / count
  const size = Math.sqrt(
    points.reduce((total, { x, y }) => total + (x - meanX) ** 2 + (y - meanY) ** 2, 0) / count,
  )
  if (!(size > 0)) throw new RangeError('points must not all be the same')
  // About their mean and in units of their spread, so that no digits are lost and the limits need no unit.
  const scaled = points.map(({ x, y }) => ({ x: (x - meanX) / size, y: (y - meanY) / size }))
  const start = taubin(scaled)
  // On a short arc the algebraic fit may lie on the wrong side of the points, and no small step leads round.
  const tries = [start, { ...start, a: -start.a, b: -start.b }].map((from) => geometric(scaled, from))
  const { a, b, r, normal, squares } = tries.reduce((best, other) =>
    other.squares < best.squares ? other : best,
  )
  if (!(r < COLLINEAR)) throw new RangeError('points must not lie on one line')

  const residuals = scaled.map(({ x, y }) => (Math.hypot(x - a, y - b) - r) * size)
  const covariance = inverse3(normal)
  const variance = count > 3 && covariance ? squares / (count - 3) : null
  const errorOf = (place: number) =>
    variance === null || !covariance
      ? null
      : Math.sqrt(Math.max(0, variance * (covariance[place] as number))) * size
  const arcRadians = arcOf(scaled, a, b)
  return {
    centreX: meanX + a * size,
    centreY: meanY + b * size,
    radius: r * size,
    centreXError: errorOf(0),
    centreYError: errorOf(4),
    radiusError: errorOf(8),
    rms: Math.sqrt(residuals.reduce((total, residual) => total + residual ** 2, 0) / count),
    residuals,
    arcRadians,
    warning:
      arcRadians < SHORT_ARC_RADIANS
        ? `The points span ${Math.round((arcRadians * 180) / Math.PI)}° of the circle: centre and radius are hardly told apart. Points all around it say more.`
        : null,
  }
}

type Scaled = readonly { x: number; y: number }[]
type Circle = { a: number; b: number; r: number }

/** Taubin's fit, by Newton's method on the characteristic polynomial of centred points. */
function taubin(points: Scaled): Circle {
  const count = points.length
  let [xx, yy, xy, xz, yz, zz] = [0, 0, 0, 0, 0, 0]
  for (const { x, y } of points) {
    const z = x * x + y * y
    xx += (x * x) / count
    yy += (y * y) / count
    xy += (x * y) / count
    xz += (x * z) / count
    yz += (y * z) / count
    zz += (z * z) / count
  }
  const mz = xx + yy
  const covXy = xx * yy - xy * xy
  const varZ = zz - mz * mz
  const a3 = 4 * mz
  const a2 = -3 * mz * mz - zz
  const a1 = varZ * mz + 4 * covXy * mz - xz * xz - yz * yz
  const a0 = xz * (xz * yy - yz * xy) + yz * (yz * xx - xz * xy) - varZ * covXy
  let root = 0
  for (let i = 0; i < 100; i++) {
    const value = a0 + root * (a1 + root * (a2 + root * a3))
    const slope = a1 + root * (2 * a2 + root * 3 * a3)
    const next = root - value / slope
    if (!Number.isFinite(next) || Math.abs(next - root) <= 1e-15 * Math.max(1, Math.abs(next))) break
    root = next
  }
  const determinant = root * root - root * mz + covXy
  // Three points of which two nearly fall together leave it near zero without lying on a line.
  if (Math.abs(determinant) < 1e-14) throw new RangeError('points must not lie on one line')
  const a = (xz * (yy - root) - yz * xy) / determinant / 2
  const b = (yz * (xx - root) - xz * xy) / determinant / 2
  return { a, b, r: Math.sqrt(a * a + b * b + mz) }
}

/** Levenberg and Marquardt's method on centre and radius. */
function geometric(points: Scaled, start: Circle) {
  let circle = start
  let { squares, normal, gradient } = normalOf(points, circle)
  let damping = 1e-3
  for (let i = 0; i < MOST_ITERATIONS; i++) {
    const damped = normal.map((value, place) => (place % 4 === 0 ? value * (1 + damping) + 1e-300 : value))
    const inverse = inverse3(damped)
    if (!inverse) break
    const [da = 0, db = 0, dr = 0] = [0, 1, 2].map((row) =>
      gradient.reduce((total, g, column) => total + (inverse[3 * row + column] as number) * g, 0),
    )
    const next = { a: circle.a + da, b: circle.b + db, r: circle.r + dr }
    const there = normalOf(points, next)
    const isSmall = Math.hypot(da, db, dr) <= CONVERGED * (1 + next.r)
    if (there.squares <= squares) {
      circle = next
      ;({ squares, normal, gradient } = there)
      damping = Math.max(damping / 10, 1e-12)
    } else damping *= 10
    if (isSmall || damping > 1e12) break
  }
  return { ...circle, squares, normal }
}

function normalOf(points: Scaled, { a, b, r }: Circle) {
  const normal = new Array<number>(9).fill(0)
  const gradient = [0, 0, 0]
  let squares = 0
  for (const { x, y } of points) {
    const distance = Math.hypot(x - a, y - b) || 1e-300
    const row = [(a - x) / distance, (b - y) / distance, -1]
    const residual = distance - r
    squares += residual * residual
    for (let i = 0; i < 3; i++) {
      gradient[i] = (gradient[i] as number) - (row[i] as number) * residual
      for (let j = 0; j < 3; j++)
        normal[3 * i + j] = (normal[3 * i + j] as number) + (row[i] as number) * (row[j] as number)
    }
  }
  return { squares, normal, gradient }
}

/** Inverse of a symmetric 3 × 3 matrix, row by row; null where it has none. */
function inverse3(m: readonly number[]): number[] | null {
  const [a = 0, b = 0, c = 0, , d = 0, e = 0, , , f = 0] = m
  const A = d * f - e * e
  const B = c * e - b * f
  const C = b * e - c * d
  const determinant = a * A + b * B + c * C
  if (!(Math.abs(determinant) > 0)) return null
  const D = a * f - c * c
  const E = b * c - a * e
  const F = a * d - b * b
  return [A, B, C, B, D, E, C, E, F].map((value) => value / determinant)
}

/** The whole turn less the widest gap between neighbouring points. */
function arcOf(points: Scaled, a: number, b: number): number {
  const angles = points.map(({ x, y }) => Math.atan2(y - b, x - a)).sort((p, q) => p - q)
  const gaps = angles.map((angle, i) =>
    i === 0 ? angle + 2 * Math.PI - (angles.at(-1) ?? 0) : angle - (angles[i - 1] ?? 0),
  )
  return 2 * Math.PI - Math.max(...gaps)
}
