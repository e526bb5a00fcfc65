import { describe, expect, it } from 'vitest'
import { completeElliptic } from '#app/physics/elliptic.ts'
import { expectNear } from '#tests/support/near.ts'
import elliptic from './data/elliptic.json'

describe('complete elliptic integrals', () => {
  const table = elliptic.complete_K_E
  it.each(table.expected)('match Abramowitz and Stegun, Table 17.1 at m = $m', ({ m, K, E }) => {
    const { k, e } = completeElliptic(m)
    // The table's m is the decimal number; the nearest double moves K by up to 2⁻⁵⁴/2(1 − m).
    const representation = 2 ** -55 / (1 - m)
    expectNear(k, Number(K), { ...table.tolerance, abs: representation })
    expectNear(e, Number(E), table.tolerance)
  })

  it('take the parameter m = k², not the modulus k', () => {
    const { data, expected, tolerance } = elliptic.K_E_modulus_half
    const { k, e } = completeElliptic(data.m)
    expectNear(k, expected.K, tolerance)
    expectNear(e, expected.E, tolerance)
  })

  it('obey the Legendre relation EK′ + E′K − KK′ = π/2 (Abramowitz and Stegun 17.3.13)', () => {
    const { data, expected, tolerance } = elliptic.legendre_relation
    for (const m of data.m_values) {
      const one = completeElliptic(m)
      const other = completeElliptic(1 - m)
      expectNear(one.e * other.k + other.e * one.k - one.k * other.k, expected.value, tolerance)
    }
  })

  it.each([1, 1.5, -0.1, Number.NaN, Number.POSITIVE_INFINITY])('refuse m = %s by name', (m) => {
    expect(() => completeElliptic(m)).toThrow(RangeError)
    expect(() => completeElliptic(m)).toThrow(/\bm must/)
  })
})
