import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { lastDigitOf } from '#app/metrology/last-digit.ts'

describe('the last digit of a number as it is written', () => {
  it.each([
    ['200.4', 0.1],
    ['200,40', 0.01],
    ['200', 1],
    ['200.', 1],
    ['.52', 0.01],
    ['1.52e-3', 1e-5],
    ['2.0E2', 10],
    ['−1.5', 0.1],
    [' 1.502 ', 0.001],
  ])('of %j is %d', (text, digit) => {
    expect(lastDigitOf(text)).toBe(digit)
  })

  it('is that of toFixed, whatever the number', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -1e6, max: 1e6, noNaN: true }),
        fc.integer({ min: 0, max: 9 }),
        (x, places) => {
          expect(lastDigitOf(x.toFixed(places))).toBe(Number(`1e-${places}`))
        },
      ),
    )
  })

  it.each(['', 'x', '1.2.3', '1 V', 'Infinity', 'NaN', '1e', '0x10'])('is refused for %j', (text) => {
    expect(() => lastDigitOf(text)).toThrow(RangeError)
  })
})
