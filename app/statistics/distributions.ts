import { requireDegreesOfFreedom, requireFinite, requireNotNegative, requireProbability } from './domain.ts'
import { normalQuantile } from './normal-quantile.ts'
import { incompleteBeta, incompleteGamma, logBeta, logGamma } from './special-functions.ts'

export { normalQuantile } from './normal-quantile.ts'

/** Above this the square of the normal and of the Student quantile agree to the last digit. */
const NORMAL_DEGREES_OF_FREEDOM = 1e17
/** Newton steps double the digits: after a step this small the next would be below rounding. */
const LAST_STEP = 1e-9
/** And steps that take in the curvature triple them. */
const LAST_HALLEY_STEP = 1e-5

/** Probability that a standard normal variable is above z, with its own relative accuracy for z > 0. */
export function normalUpperTail(z: number): number {
  requireFinite('z', z)
  const { lower, upper } = incompleteGamma(0.5, (z * z) / 2)
  return z >= 0 ? upper / 2 : 0.5 + lower / 2
}

/** @throws RangeError naming `z` */
export function normalCdf(z: number): number {
  return normalUpperTail(-z)
}

/**
 * Probability that a Student variable is above t, with its own relative accuracy for t > 0.
 *
 * @throws RangeError naming `t` or `degreesOfFreedom`
 */
export function studentUpperTail(t: number, degreesOfFreedom: number): number {
  requireFinite('t', t)
  requireDegreesOfFreedom('degreesOfFreedom', degreesOfFreedom)
  if (degreesOfFreedom > NORMAL_DEGREES_OF_FREEDOM) return normalUpperTail(t)
  const square = t * t
  if (degreesOfFreedom > 1e5 && 100 * square * square < degreesOfFreedom) {
    return nearlyNormalTail(t, degreesOfFreedom)
  }
  const sum = degreesOfFreedom + square
  const beyond = incompleteBeta(degreesOfFreedom / 2, 0.5, degreesOfFreedom / sum, square / sum) / 2
  return t >= 0 ? beyond : 1 - beyond
}

/** Fisher's expansion in 1/ν; the continued fraction would need some √ν terms. */
function nearlyNormalTail(t: number, nu: number): number {
  const s = t * t
  const first = (s + 1) / (4 * nu)
  const second = (((3 * s - 7) * s - 5) * s - 3) / (96 * nu * nu)
  const third = (((((s - 11) * s + 14) * s + 6) * s - 3) * s - 15) / (384 * nu * nu * nu)
  const density = Math.exp(-s / 2) / Math.sqrt(2 * Math.PI)
  return normalUpperTail(t) + density * t * (first + second + third)
}

/** @throws RangeError naming `t` or `degreesOfFreedom` */
export function studentCdf(t: number, degreesOfFreedom: number): number {
  return studentUpperTail(-t, degreesOfFreedom)
}

/**
 * Quantile of Student's t distribution, to about 1e-13.
 *
 * @param p cumulative probability, 0 < p < 1; 0.975 for a two-sided 95 %
 * @param degreesOfFreedom real, above 0, not rounded; Infinity gives the normal quantile
 * @throws RangeError naming `p` or `degreesOfFreedom`
 */
export function studentQuantile(p: number, degreesOfFreedom: number): number {
  requireProbability('p', p)
  requireDegreesOfFreedom('degreesOfFreedom', degreesOfFreedom)
  if (p === 0.5) return 0
  if (degreesOfFreedom > NORMAL_DEGREES_OF_FREEDOM) return normalQuantile(p)
  const tail = Math.min(p, 1 - p)
  const t = tail > 0.1 ? centralStudent(0.5 - tail, degreesOfFreedom) : outerStudent(tail, degreesOfFreedom)
  return p < 0.5 ? -t : t
}

function logStudentDensity(t: number, nu: number): number {
  return -0.5 * (nu + 1) * Math.log1p((t * t) / nu) - logBeta(0.5, nu / 2) - 0.5 * Math.log(nu)
}

/**
 * Solves P(0 < T < t) = middle. The probability is concave in t, so Newton steps from the tangent at zero
 * rise to the root without passing it.
 */
function centralStudent(middle: number, nu: number): number {
  let t = middle / Math.exp(logStudentDensity(0, nu))
  for (let i = 0; i < 100; i++) {
    const square = t * t
    const inside = incompleteBeta(0.5, nu / 2, square / (nu + square), nu / (nu + square)) / 2
    const step = (middle - inside) / Math.exp(logStudentDensity(t, nu))
    t += step
    if (Math.abs(step) <= LAST_STEP * t) break
  }
  return t
}

/**
 * Solves P(T > t) = tail in the logarithms of both. There the tail is concave and falls, so Newton steps
 * come down to the root from the right whatever the start; close to it the curvature is taken in as well
 * (Halley), which triples the digits.
 */
function outerStudent(tail: number, nu: number): number {
  const z = normalQuantile(1 - tail)
  const square = z * z
  let t = z
  if (nu >= 3) {
    // Cornish-Fisher start, Abramowitz and Stegun 26.7.5; useless for few degrees of freedom.
    const first = (square + 1) / 4
    const second = ((5 * square + 16) * square + 3) / 96
    const third = (((3 * square + 19) * square + 17) * square - 15) / 384
    const fourth = ((((79 * square + 776) * square + 1482) * square - 1920) * square - 945) / 92160
    t += (z * (first + (second + (third + fourth / nu) / nu) / nu)) / nu
  }
  const logNorm = -logBeta(0.5, nu / 2) - 0.5 * Math.log(nu)
  for (let i = 0; i < 200; i++) {
    const above = studentUpperTail(t, nu)
    const square = t * t
    const slope = (t * Math.exp(logNorm - 0.5 * (nu + 1) * Math.log1p(square / nu))) / above
    const step = Math.log(above / tail) / slope
    const bend = (step * (1 + slope - ((nu + 1) * square) / (nu + square))) / 2
    if (Math.abs(bend) < LAST_HALLEY_STEP * 1e3) {
      t *= Math.exp(step / (1 + bend))
      if (Math.abs(step) <= LAST_HALLEY_STEP) break
    } else t *= Math.exp(step)
  }
  return t
}

/**
 * Probability that a χ² variable is above x.
 *
 * @throws RangeError naming `x` or `degreesOfFreedom`
 */
export function chiSquaredUpperTail(x: number, degreesOfFreedom: number): number {
  requireNotNegative('x', x)
  requireDegreesOfFreedom('degreesOfFreedom', degreesOfFreedom)
  requireFinite('degreesOfFreedom', degreesOfFreedom)
  return incompleteGamma(degreesOfFreedom / 2, x / 2).upper
}

/** @throws RangeError naming `x` or `degreesOfFreedom` */
export function chiSquaredCdf(x: number, degreesOfFreedom: number): number {
  requireNotNegative('x', x)
  requireDegreesOfFreedom('degreesOfFreedom', degreesOfFreedom)
  requireFinite('degreesOfFreedom', degreesOfFreedom)
  return incompleteGamma(degreesOfFreedom / 2, x / 2).lower
}

/**
 * Quantile of χ².
 *
 * @param p cumulative probability, 0 < p < 1
 * @throws RangeError naming `p` or `degreesOfFreedom`
 */
export function chiSquaredQuantile(p: number, degreesOfFreedom: number): number {
  requireProbability('p', p)
  requireDegreesOfFreedom('degreesOfFreedom', degreesOfFreedom)
  requireFinite('degreesOfFreedom', degreesOfFreedom)
  const a = degreesOfFreedom / 2
  return quantileOfPositive(p, degreesOfFreedom, (x) => ({
    ...incompleteGamma(a, x / 2),
    logDensity: (a - 1) * Math.log(x) - x / 2 - a * Math.LN2 - logGamma(a),
  }))
}

/**
 * Probability that an F variable is above x.
 *
 * @throws RangeError naming `x`, `numerator` or `denominator` (the degrees of freedom)
 */
export function fUpperTail(x: number, numerator: number, denominator: number): number {
  requireNotNegative('x', x)
  return fTails(x, numerator, denominator).upper
}

/** @throws RangeError naming `x`, `numerator` or `denominator` (the degrees of freedom) */
export function fCdf(x: number, numerator: number, denominator: number): number {
  requireNotNegative('x', x)
  return fTails(x, numerator, denominator).lower
}

/**
 * Quantile of F.
 *
 * @param p cumulative probability, 0 < p < 1
 * @throws RangeError naming `p`, `numerator` or `denominator` (the degrees of freedom)
 */
export function fQuantile(p: number, numerator: number, denominator: number): number {
  requireProbability('p', p)
  return quantileOfPositive(p, 1, (x) => ({
    ...fTails(x, numerator, denominator),
    logDensity:
      (numerator / 2) * Math.log(numerator / denominator) +
      (numerator / 2 - 1) * Math.log(x) -
      ((numerator + denominator) / 2) * Math.log1p((numerator / denominator) * x) -
      logBeta(numerator / 2, denominator / 2),
  }))
}

function fTails(x: number, numerator: number, denominator: number): { lower: number; upper: number } {
  for (const [name, value] of [
    ['numerator', numerator],
    ['denominator', denominator],
  ] as const) {
    requireDegreesOfFreedom(name, value)
    requireFinite(name, value)
  }
  const sum = numerator * x + denominator
  const [share, rest] = [(numerator * x) / sum, denominator / sum]
  return {
    lower: incompleteBeta(numerator / 2, denominator / 2, share, rest),
    upper: incompleteBeta(denominator / 2, numerator / 2, rest, share),
  }
}

/** Newton steps in ln x on the logarithm of the smaller tail, held inside a shrinking bracket. */
function quantileOfPositive(
  p: number,
  start: number,
  at: (x: number) => { lower: number; upper: number; logDensity: number },
): number {
  const useLower = p < 0.5
  const target = Math.log(useLower ? p : 1 - p)
  let low = Number.NEGATIVE_INFINITY
  let high = Number.POSITIVE_INFINITY
  let u = Math.log(start)
  for (let i = 0; i < 300; i++) {
    const { lower, upper, logDensity } = at(Math.exp(u))
    const tail = useLower ? lower : upper
    const excess = Math.log(tail) - target
    const isTooHigh = useLower ? excess > 0 : excess < 0
    if (isTooHigh) high = u
    else low = u
    const slope = Math.exp(logDensity + u) / tail
    let next = u + (useLower ? -excess : excess) / slope
    if (!(next > low && next < high)) {
      if (low === Number.NEGATIVE_INFINITY) next = high - 2
      else if (high === Number.POSITIVE_INFINITY) next = low + 2
      else next = (low + high) / 2
    }
    const step = next - u
    u = next
    if (Math.abs(step) <= 1e-14 * Math.max(1, Math.abs(u))) break
  }
  return Math.exp(u)
}
