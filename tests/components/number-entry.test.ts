import { describe, expect, it } from 'vitest'
import { readNumber, stepNumber } from '#app/components/number-entry.ts'

describe('readNumber', () => {
  it.each([
    ['200', 200],
    ['1,5', 1.5],
    [' 0.25 ', 0.25],
    ['.5', 0.5],
    ['−3', -3],
  ])('reads %j as %d', (text, value) => expect(readNumber(text)).toBe(value))

  it('takes an empty field as nothing', () => expect(readNumber('  ')).toBeNull())

  it.each(['two', '1.5.2', '1 V', '-'])('takes %j for no number', (text) =>
    expect(readNumber(text)).toBeNaN(),
  )
})

describe('stepNumber', () => {
  const anode = { step: 5, decimals: 1, limit: 300 }

  it('goes to the next place on the grid of the step', () => {
    expect(stepNumber({ ...anode, text: '200.0', direction: 1 })).toBe('205.0')
    expect(stepNumber({ ...anode, text: '201.3', direction: 1 })).toBe('205.0')
    expect(stepNumber({ ...anode, text: '201.3', direction: -1 })).toBe('200.0')
  })

  it('stops at the limit and at zero', () => {
    expect(stepNumber({ ...anode, text: '299', direction: 1 })).toBe('300.0')
    expect(stepNumber({ ...anode, text: '300.0', direction: 1 })).toBe('300.0')
    expect(stepNumber({ ...anode, text: '2', direction: -1 })).toBe('0.0')
  })

  it('does not hang on a step that binary numbers cannot hold', () => {
    const coils = { step: 0.05, decimals: 3, limit: 2 }
    let text = '0'
    for (let i = 0; i < 40; i++) text = stepNumber({ ...coils, text, direction: 1 })
    expect(text).toBe('2.000')
  })

  it('starts from zero where no number stands', () => {
    expect(stepNumber({ ...anode, text: 'abc', direction: 1 })).toBe('5.0')
  })
})
