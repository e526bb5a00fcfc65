import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import {
  formatConcise,
  formatExpanded,
  formatFixed,
  formatPowerOfTen,
  scientificExponent,
} from '#app/metrology/format.ts'

describe('a value with its standard uncertainty', () => {
  it.each([
    [1.749e11, 1.9e9, 11, '1.749(19)'],
    // CODATA 2022 as published: 1.758 820 008 38(55) × 10¹¹ and 1.256 637 061 27(20) × 10⁻⁶.
    [1.75882000838e11, 55, 11, '1.75882000838(55)'],
    [1.25663706127e-6, 2e-16, -6, '1.25663706127(20)'],
    [1.7495, 0.0195, 0, '1.750(20)'],
    [1.5, 0.0996, 0, '1.50(10)'],
    [1.5, 0.0994, 0, '1.500(99)'],
    [0.96, 0.996, 0, '1.0(10)'],
    [9.996, 0.05, 0, '9.996(50)'],
    [1234.5, 1.2, 0, '1234.5(12)'],
    [1234.5, 12.3, 0, '1235(12)'],
    [1234.5, 123, 0, '1230(120)'],
    [1234.5, 9960, 0, '1000(10000)'],
    [-0.0042, 0.0011, 0, '\u22120.0042(11)'],
    [-0.00001, 0.011, 0, '0.000(11)'],
    [0, 0.5, 0, '0.00(50)'],
    [5e-324, 1, 0, '0.0(10)'],
  ])('%s with %s × 10^-%s is %s', (value, uncertainty, exponent, text) => {
    expect(formatConcise(value, uncertainty, { exponent })).toBe(text)
  })

  it('always shows two digits of the uncertainty, which read back as it was to within their last', () => {
    const power = fc.integer({ min: -30, max: 30 })
    const digits = fc.double({ min: 1, max: 9.9999, noNaN: true })
    fc.assert(
      fc.property(digits, power, fc.double({ min: -5, max: 5, noNaN: true }), (leading, exponent, ratio) => {
        const uncertainty = leading * 10 ** exponent
        const value = ratio * uncertainty * 100
        const text = formatConcise(value, uncertainty, { exponent: exponent + 2 })
        const [shown, parenthesis] = text.replace('\u2212', '-').replace(')', '').split('(') as [
          string,
          string,
        ]
        expect(parenthesis).toMatch(/^[1-9]\d$/)
        const decimals = shown.split('.')[1]?.length ?? 0
        const back = Number(parenthesis) * 10 ** (exponent + 2 - decimals)
        expect(Math.abs(back / uncertainty - 1)).toBeLessThan(0.0501)
        const off = Math.abs(Number(shown) * 10 ** (exponent + 2) - value)
        expect(off).toBeLessThanOrEqual(0.5001 * 10 ** (exponent + 2 - decimals))
      }),
    )
  })
})

describe('a value with its expanded uncertainty', () => {
  it.each([
    [1.749e11, 4e9, 11, '1.749 ± 0.040'],
    [1.749e11, 3.951e9, 11, '1.749 ± 0.040'],
    [1.749e11, 9.96e9, 11, '1.75 ± 0.10'],
    [-200.04, 1.25, 0, '\u2212200.0 ± 1.3'],
    [1234, 160, 0, '1230 ± 160'],
  ])('%s with %s × 10^-%s is %s', (value, expanded, exponent, text) => {
    expect(formatExpanded(value, expanded, { exponent })).toBe(text)
  })
})

describe('plain numbers', () => {
  it.each([
    [1.005, 2, '1.01'],
    [2.5, 0, '3'],
    [-2.5, 0, '\u22123'],
    [-0.004, 2, '0.00'],
    [1e21, 1, '1000000000000000000000.0'],
    [200, 1, '200.0'],
  ])('%s with %s decimals is %s', (value, decimals, text) => {
    expect(formatFixed(value, decimals)).toBe(text)
  })

  it('have powers of ten', () => {
    expect(formatPowerOfTen(11)).toBe('10¹¹')
    expect(formatPowerOfTen(-6)).toBe('10⁻⁶')
    expect(formatPowerOfTen(0)).toBe('')
    expect(scientificExponent(1.749e11)).toBe(11)
    expect(scientificExponent(-0.00999)).toBe(-3)
    expect(scientificExponent(1000)).toBe(3)
    expect(scientificExponent(0)).toBe(0)
  })
})

describe('what cannot be shown is refused by name', () => {
  it.each<[string, () => unknown]>([
    ['value', () => formatConcise(Number.NaN, 1)],
    ['value', () => formatExpanded(Number.POSITIVE_INFINITY, 1)],
    ['standardUncertainty', () => formatConcise(1, 0)],
    ['standardUncertainty', () => formatConcise(1, Number.NaN)],
    ['expandedUncertainty', () => formatExpanded(1, -1)],
    ['exponent', () => formatConcise(1, 1, { exponent: 0.5 })],
    ['exponent', () => formatPowerOfTen(Number.NaN)],
    ['value', () => formatFixed(Number.NaN, 2)],
    ['decimals', () => formatFixed(1, -1)],
    ['value', () => scientificExponent(Number.NaN)],
  ])('%s', (name, call) => {
    expect(call).toThrow(RangeError)
    expect(call).toThrow(name)
  })
})
