import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { allanCurve, allanDeviation, overlappingAllanDeviation } from '#app/statistics/allan.ts'
import { expectNear } from '#tests/support/near.ts'
import data from './data/allan.json'

/** The generator of NIST SP 1065, page 108. */
function lehmer(count: number): number[] {
  let state = 1234567890
  return Array.from({ length: count }, () => {
    const value = state / 2147483647
    state = (16807 * state) % 2147483647
    return value
  })
}

describe('The Allan deviation', () => {
  it.each(['nbs14_9point', 'nbs14_1000point'] as const)(
    'has the published values of NIST SP 1065: %s',
    (name) => {
      const { expected } = data[name]
      const values = name === 'nbs14_9point' ? data.nbs14_9point.data.frequency : lehmer(1000)
      expected.tau.forEach((m, i) => {
        expectNear(allanDeviation(values, m), expected.published.adev[i] as number, { rel: 2e-6 })
        expectNear(overlappingAllanDeviation(values, m), expected.published.oadev[i] as number, { rel: 2e-6 })
        expectNear(allanDeviation(values, m), expected.full.adev[i] as number, { rel: 1e-10 })
        expectNear(overlappingAllanDeviation(values, m), expected.full.oadev[i] as number, { rel: 1e-10 })
      })
    },
  )

  it('of a steady drift is drift times averaging time over √2, and of +1, −1, … √2 and nothing (closed forms)', () => {
    const drift = Array.from({ length: 64 }, (_, k) => 0.01 * k)
    const alternating = Array.from({ length: 64 }, (_, k) => (k % 2 === 0 ? 1 : -1))
    for (const m of [1, 2, 4, 8]) {
      expectNear(allanDeviation(drift, m), (0.01 * m) / Math.SQRT2, { rel: 1e-10 })
      expectNear(overlappingAllanDeviation(drift, m), (0.01 * m) / Math.SQRT2, { rel: 1e-10 })
    }
    expectNear(allanDeviation(alternating, 1), Math.SQRT2, { rel: 1e-12 })
    expectNear(allanDeviation(alternating, 2), 0, { abs: 1e-14 })
  })

  it('does not change with a shift, and grows with the unit', () => {
    fc.assert(
      fc.property(
        fc.array(fc.double({ min: -1, max: 1, noNaN: true }), { minLength: 12, maxLength: 40 }),
        (values) => {
          const moved = values.map((value) => 1e6 + 3 * value)
          expectNear(overlappingAllanDeviation(moved, 3), 3 * overlappingAllanDeviation(values, 3), {
            rel: 1e-6,
            abs: 1e-8,
          })
        },
      ),
    )
  })

  it('as a curve doubles the averaging up to a quarter of the record, and falls as 1/√τ for white noise', () => {
    const curve = allanCurve(lehmer(4096), 0.1)
    expect(curve.map(({ m }) => m)).toEqual([1, 2, 4, 8, 16, 32, 64, 128, 256, 512, 1024])
    const [first, , , , , , seventh] = curve
    expectNear((first?.deviation ?? 0) / (seventh?.deviation ?? 1), 8, { rel: 0.25 })
    expect(seventh?.seconds).toBeCloseTo(6.4)
  })

  it('is refused for too short a record, an averaging that is none, and what is no number', () => {
    expect(() => allanDeviation([1, 2, 3], 2)).toThrow(/^values must be at least 4/)
    expect(() => allanDeviation([1, 2, 3], 0)).toThrow(/^m must/)
    expect(() => overlappingAllanDeviation([1, Number.NaN, 3], 1)).toThrow(/^values\[1\]/)
    expect(() => allanCurve([1, 2, 3], 1)).toThrow(/^values/)
    expect(() => allanCurve(lehmer(10), 0)).toThrow(/^intervalSeconds/)
  })
})
