import { describe, expect, test } from 'vitest'
import { parseBooleans, parseErrorEntry, parseNumbers } from '#bridge/instruments/answers.ts'

describe('numbers', () => {
  // The three numeric response forms of IEEE 488.2-1992, 8.7.2 (NR1), 8.7.3 (NR2), 8.7.4 (NR3).
  test.each([
    ['42', [42]],
    ['+42', [42]],
    ['-3.50', [-3.5]],
    ['+1.2345E+02', [123.45]],
    ['-1E-3', [-0.001]],
    ['1.5,-2,3E1', [1.5, -2, 30]],
    ['1.5, 2', [1.5, 2]],
  ])('%s is read', (answer, values) => {
    expect(parseNumbers(answer, values.length)).toEqual(values)
  })

  // SCPI-1999 volume 1, 7.2.1.4 and 7.2.1.5: infinity 9.9E37, not-a-number 9.91E37.
  test.each(['9.9E37', '-9.9E37', '+9.90000E+37', '9.91E37', '+9.91E+37'])('%s is no reading', (answer) => {
    expect(parseNumbers(answer, 1)).toEqual([null])
    expect(parseNumbers(`1,${answer},3`, 3)).toEqual([1, null, 3])
  })

  test.each([
    '',
    ' ',
    '1,',
    ',1',
    '1,2',
    '1.',
    '.5',
    '1 2',
    '1.2.3',
    '1e',
    'E5',
    '--1',
    '0x10',
    '#H10',
    'NaN',
    'Infinity',
    '1_000',
    '1;2',
    '1V',
    '?2.5',
    '12\u0000',
    '1'.repeat(40),
  ])('%j is not one number', (answer) => {
    expect(parseNumbers(answer, 1)).toBeNull()
  })

  test('a list of the wrong length is nothing, not a part of it', () => {
    expect(parseNumbers('1,2', 3)).toBeNull()
    expect(parseNumbers('1,2,3,4', 3)).toBeNull()
  })
})

describe('booleans', () => {
  test('0 and 1 are read, and nothing else', () => {
    expect(parseBooleans('1,0', 2)).toEqual([true, false])
    for (const answer of ['1', '1,0,1', '2,0', 'ON,OFF', '1.0,0', '', ','])
      expect(parseBooleans(answer, 2)).toBeNull()
  })
})

describe('error queue entries', () => {
  // The form and the two texts are those of SCPI-1999 volume 2, 21.8.
  test('number and text are read', () => {
    expect(parseErrorEntry('0,"No error"')).toEqual({ number: 0, text: 'No error' })
    expect(parseErrorEntry('+0,"No error"')).toEqual({ number: 0, text: 'No error' })
    expect(parseErrorEntry('-222,"Data out of range"')).toEqual({ number: -222, text: 'Data out of range' })
    expect(parseErrorEntry('-221,"Settings conflict;interlock open"')).toEqual({
      number: -221,
      text: 'Settings conflict;interlock open',
    })
  })

  test('a refusal whose number was damaged to 0 is not taken for success', () => {
    expect(parseErrorEntry('0,"Data out of range"')).toBeNull()
    expect(parseErrorEntry('-000,"Data out of range"')).toBeNull()
    expect(parseErrorEntry('-222,"No error"')).toBeNull()
  })

  test.each([
    '',
    '0',
    '-222',
    '-222,Data out of range',
    '-222,"Data',
    '"No error",0',
    '?222,"Data out of range"',
  ])('%j is no entry', (answer) => {
    expect(parseErrorEntry(answer)).toBeNull()
  })
})
