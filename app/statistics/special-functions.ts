import { requirePositive } from './domain.ts'

const HALF_LOG_TWO_PI = 0.9189385332046727
const MOST_TERMS = 100_000
const TINY = 1e-300

/**
 * Natural logarithm of Γ(x) for x > 0, to about 1e-15 of max(1, |result|).
 *
 * @throws RangeError naming `x`
 *
 * Source: Stirling's series, Abramowitz and Stegun 6.1.41, with 6.1.15 below 10.
 */
export function logGamma(x: number): number {
  requirePositive('x', x)
  let product = 1
  let shifted = x
  while (shifted < 10) {
    product *= shifted
    shifted += 1
  }
  return (
    (shifted - 0.5) * Math.log(shifted) - shifted + HALF_LOG_TWO_PI + stirling(shifted) - Math.log(product)
  )
}

/** What Stirling's formula lacks of ln Γ(x), x ≥ 10. */
function stirling(x: number): number {
  const inverse = 1 / (x * x)
  const coefficients = [
    -3617 / 122400,
    1 / 156,
    -691 / 360360,
    1 / 1188,
    -1 / 1680,
    1 / 1260,
    -1 / 360,
    1 / 12,
  ]
  return coefficients.reduce((sum, coefficient) => sum * inverse + coefficient, 0) / x
}

/** ln B(a, b), without the loss of digits that the difference of large ln Γ would bring. */
export function logBeta(a: number, b: number): number {
  const small = Math.min(a, b)
  const large = Math.max(a, b)
  if (large < 10) return logGamma(small) + (logGamma(large) - logGamma(small + large))
  const sum = small + large
  const remainder = Math.log1p(-small / sum)
  if (small >= 10) {
    const correction = stirling(small) + stirling(large) - stirling(sum)
    return (
      HALF_LOG_TWO_PI -
      0.5 * Math.log(large) +
      correction +
      (small - 0.5) * Math.log(small / sum) +
      large * remainder
    )
  }
  const correction = stirling(large) - stirling(sum)
  return logGamma(small) + correction + small - small * Math.log(sum) + (large - 0.5) * remainder
}

/**
 * Regularised incomplete beta function I_x(a, b). Both x and y = 1 − x are taken, so that the caller can
 * give the smaller one without rounding.
 *
 * Source: the continued fraction of Abramowitz and Stegun 26.5.8, evaluated by Lentz's method.
 */
export function incompleteBeta(a: number, b: number, x: number, y: number): number {
  if (x <= 0) return 0
  if (y <= 0) return 1
  if (x > (a + 1) / (a + b + 2)) return 1 - incompleteBetaSmall(b, a, y, x)
  return incompleteBetaSmall(a, b, x, y)
}

function incompleteBetaSmall(a: number, b: number, x: number, y: number): number {
  const logX = x < 0.5 ? Math.log(x) : Math.log1p(-y)
  const logY = y < 0.5 ? Math.log(y) : Math.log1p(-x)
  const front = Math.exp(a * logX + b * logY - logBeta(a, b)) / a
  let c = 1
  let d = 1 / notZero(1 - ((a + b) * x) / (a + 1))
  let fraction = d
  for (let m = 1; m <= MOST_TERMS; m++) {
    const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m))
    d = 1 / notZero(1 + even * d)
    c = notZero(1 + even / c)
    fraction *= d * c
    const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1))
    d = 1 / notZero(1 + odd * d)
    c = notZero(1 + odd / c)
    const factor = d * c
    fraction *= factor
    if (Math.abs(factor - 1) < 2e-16) break
  }
  return front * fraction
}

/**
 * Regularised incomplete gamma functions P(a, x) and Q(a, x) = 1 − P, each with its own relative accuracy.
 *
 * Source: Abramowitz and Stegun 6.5.29 (series) and 6.5.31 (continued fraction).
 */
export function incompleteGamma(a: number, x: number): { lower: number; upper: number } {
  if (x <= 0) return { lower: 0, upper: 1 }
  const front = gammaFront(a, x)
  if (x < a + 1) {
    let term = 1 / a
    let sum = term
    for (let n = 1; n <= MOST_TERMS; n++) {
      term *= x / (a + n)
      sum += term
      if (term < sum * 1e-17) break
    }
    const lower = front * sum
    return { lower, upper: 1 - lower }
  }
  let b = x + 1 - a
  let c = 1 / TINY
  let d = 1 / b
  let fraction = d
  for (let n = 1; n <= MOST_TERMS; n++) {
    const numerator = -n * (n - a)
    b += 2
    d = 1 / notZero(numerator * d + b)
    c = notZero(b + numerator / c)
    const factor = d * c
    fraction *= factor
    if (Math.abs(factor - 1) < 2e-16) break
  }
  const upper = front * fraction
  return { lower: 1 - upper, upper }
}

/** xᵃe⁻ˣ/Γ(a). */
function gammaFront(a: number, x: number): number {
  if (a < 10) return Math.exp(a * Math.log(x) - x - logGamma(a))
  const excess = (x - a) / a
  return Math.sqrt(a / (2 * Math.PI)) * Math.exp(a * (Math.log1p(excess) - excess) - stirling(a))
}

function notZero(value: number): number {
  return Math.abs(value) < TINY ? TINY : value
}
