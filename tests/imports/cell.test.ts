import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { readCell, unitInCells } from '#app/imports/cell.ts'
import { unitsOf } from '#app/imports/mapping.ts'

const lengths = unitsOf.diameter
const inUnit = (unit: string, decimal: '.' | ',' = '.') => ({ decimal, unit, units: lengths })

describe('a cell of a length', () => {
  it.each([
    ['8.1', 'cm', 0.081, 0.001],
    ['81', 'mm', 0.081, 0.001],
    ['0.0810', 'm', 0.081, 0.0001],
    ['8.1e0', 'cm', 0.081, 0.001],
    ['.5', 'cm', 0.005, 0.001],
    ['8.', 'cm', 0.08, 0.01],
    ['\u00a08.1\u2009', 'cm', 0.081, 0.001],
    ['−8.1', 'cm', -0.081, 0.001],
    ['+8.1', 'cm', 0.081, 0.001],
    ['8.1 cm', 'cm', 0.081, 0.001],
  ])('%j in %s is exactly %d m, to %d m', (text, unit, value, lastDigit) => {
    expect(readCell(text, inUnit(unit))).toEqual({ value, lastDigit })
  })

  it('has its unit in itself where the column says so', () => {
    expect(readCell('8.1 cm', inUnit(unitInCells))).toEqual({ value: 0.081, lastDigit: 0.001 })
    expect(readCell('81mm', inUnit(unitInCells))).toEqual({ value: 0.081, lastDigit: 0.001 })
    expect(readCell('8.1', inUnit(unitInCells))).toBe('“8.1” has no unit')
  })

  it('is read with a decimal comma where the file has one, and then a point is none', () => {
    expect(readCell('8,10', inUnit('cm', ','))).toEqual({ value: 0.081, lastDigit: 0.0001 })
    expect(readCell('8.1', inUnit('cm', ','))).toBe('“8.1” is not a number')
    expect(readCell('1.234,5', inUnit('cm', ','))).toBe('“1.234,5” is not a number')
    expect(readCell('8,1', inUnit('cm'))).toBe('“8,1” is not a number')
  })

  it.each([
    ['', 'is empty'],
    ['  ', 'is empty'],
    ['NaN', '“NaN” is not a number'],
    ['Infinity', '“Infinity” is not a number'],
    ['-inf', '“-inf” is not a number'],
    ['1e999', '“1e999” is too large'],
    ['#REF!', '“#REF!” is not a number'],
    ['0x10', '“0x10” is not a number'],
    ['8.1 mm', '“8.1 mm” is in mm, and the column in cm'],
    ['8.1 ft', '“8.1 ft” is not a number'],
    ['8.1 8.2', '“8.1 8.2” is not a number'],
    ['constructor', '“constructor” is not a number'],
    ['1 constructor', '“1 constructor” is not a number'],
  ])('%j is refused: %s', (text, reason) => {
    expect(readCell(text, inUnit('cm'))).toBe(reason)
  })

  it.each(['=1+1', '+cmd|calc', '@SUM(A1)', '-2+3', '=HYPERLINK("x")', '\t=1'])(
    'is never a formula that is worked out: %j is text',
    (text) => {
      expect(readCell(text, inUnit('cm'))).toMatch(/is not a number$/)
    },
  )

  it('gives back any number that is written, whatever its decimals', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -1e6, max: 1e6, noNaN: true }),
        fc.integer({ min: 0, max: 9 }),
        (x, places) => {
          const text = x.toFixed(places)
          const read = readCell(text, inUnit('m'))
          expect(read).toEqual({ value: Number(text), lastDigit: Number(`1e${-places}`) })
          expect(readCell(text.replace('.', ','), inUnit('m', ','))).toEqual(read)
        },
      ),
    )
  })

  it('says no more than forty characters of what it holds', () => {
    expect(String(readCell('x'.repeat(500), inUnit('cm'))).length).toBeLessThan(70)
  })
})
