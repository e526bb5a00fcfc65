/**
 * Complete elliptic integrals of the first and second kind by the arithmetic-geometric mean.
 *
 * @param m the parameter m = k², not the modulus k; 0 ≤ m < 1
 * @returns K(m) and E(m), to about 1e-15 relative
 * @throws RangeError naming `m` outside 0 ≤ m < 1 (K is infinite at 1)
 *
 * Source: Abramowitz and Stegun, Handbook of Mathematical Functions, 17.6.
 */
export function completeElliptic(m: number): { k: number; e: number } {
  if (!(m >= 0 && m < 1)) throw new RangeError(`m must be at least 0 and below 1, got ${m}`)
  let a = 1
  let b = Math.sqrt(1 - m)
  let c = m / (2 * (1 + b))
  let weight = 1
  let deficit = m / 2 + c * c
  b = Math.sqrt(b)
  a = (1 + b * b) / 2
  // c falls quadratically: once c² is below the rounding error of a, the mean has converged.
  while (c > 4e-9 * a) {
    const next = (a + b) / 2
    b = Math.sqrt(a * b)
    c = (c * c) / (4 * next)
    a = next
    weight *= 2
    deficit += weight * c * c
  }
  const k = Math.PI / (2 * a)
  return { k, e: k * (1 - deficit) }
}
