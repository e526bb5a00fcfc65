import { expect } from 'vitest'

/** Fails unless |actual − expected| ≤ relative·|expected| + absolute. */
export function expectNear(
  actual: number,
  expected: number,
  tolerance: { rel?: number; abs?: number },
): void {
  const allowed = (tolerance.rel ?? 0) * Math.abs(expected) + (tolerance.abs ?? 0)
  const off = Math.abs(actual - expected)
  expect(off <= allowed, `${actual} should be ${expected} within ${allowed}, is off by ${off}`).toBe(true)
}
