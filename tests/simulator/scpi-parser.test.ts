import fc from 'fast-check'
import { beforeEach, describe, expect, it } from 'vitest'
import { createWorkbench, type Workbench } from './workbench.ts'

let bench: Workbench
const supply = (message: string) => bench.say('supply', message)
const errorOf = (message: string) => {
  supply('*CLS')
  supply(message)
  return Number(supply('SYST:ERR?')?.split(',')[0])
}

beforeEach(() => {
  bench = createWorkbench()
})

describe('headers', () => {
  it.each([
    'VOLT 6.3,(@1)',
    'volt 6.3,(@1)',
    'Voltage 6.3,(@1)',
    'SOUR:VOLT 6.3,(@1)',
    ':SOURce:VOLTage:LEVel 6.3,(@1)',
    'SOURCE:VOLTAGE:LEVEL:IMMEDIATE:AMPLITUDE 6.3,(@1)',
    'SOUR1:VOLT 6.3',
    '  VOLT\t6.3 , ( @1 )  ',
    'VOLT 6.3,(@1)\r',
  ])('takes %j', (message) => {
    expect(errorOf(message)).toBe(0)
    expect(supply('VOLT? (@1)')).toBe('6.300')
  })

  it.each([
    ['VOL 6.3,(@1)', -113],
    ['VOLTA 6.3,(@1)', -113],
    ['VOLT1 6.3,(@1)', -113],
    ['NOSUCH', -113],
    ['*NOSUCH', -113],
    ['*IDN', -113],
    ['INT:STAT? (@1)', -113],
    ['VOLTAGELEVELS 6.3,(@1)', -112],
    ['VOLT$ 6.3', -101],
    ['::VOLT 6.3', -102],
    ['VOLT: 6.3', -102],
    ['VOLT?(@1)', -111],
    ['SOUR4:VOLT 6.3', -114],
    ['OUTP0 ON', -114],
    [';', -102],
  ])('answers %j with %i', (message, code) => {
    expect(errorOf(message)).toBe(code)
  })

  it('continues at the level of the last header after a semicolon', () => {
    expect(supply('SOUR:VOLT 5,(@1);CURR 1,(@1);VOLT? (@1);CURR? (@1)')).toBe('5.000;1.000')
    expect(supply('MEAS:VOLT? (@1);CURR? (@1)')?.split(';')).toHaveLength(2)
    expect(errorOf('VOLT:PROT 8,(@1);CURR 1,(@1)')).toBe(-113)
  })

  it('returns to the root with a colon and is not moved by a common command', () => {
    expect(errorOf('VOLT:PROT 8,(@1);:CURR 1,(@1)')).toBe(0)
    expect(supply('MEAS:VOLT? (@1);*ESE?;CURR? (@1)')?.split(';')).toHaveLength(3)
  })

  it('takes an empty message for nothing', () => {
    expect(errorOf('')).toBe(0)
    expect(errorOf(' \r')).toBe(0)
  })
})

describe('parameters', () => {
  it.each([
    ['VOLT 6300 mV,(@1)', '6.300'],
    ['VOLT 6.3V,(@1)', '6.300'],
    ['VOLT +63e-1,(@1)', '6.300'],
    ['VOLT 63 E -1 V,(@1)', '6.300'],
    ['VOLT .0063KV,(@1)', '6.300'],
    ['VOLT MAX,(@1)', '8.000'],
    ['VOLT MINimum,(@1)', '0.000'],
    ['VOLT DEF,(@1)', '0.000'],
    ['VOLT 6.29951,(@1)', '6.300'],
  ])('reads %j as %s V', (message, answer) => {
    expect(errorOf(message)).toBe(0)
    expect(supply('VOLT? (@1)')).toBe(answer)
  })

  it('reads milliamperes as such and not as mega', () => {
    supply('CURR 12 MA,(@2)')
    expect(supply('CURR? (@2)')).toBe('0.01200')
  })

  it.each([
    ['VOLT', -109],
    ['VOLT 6.3', -109],
    ['VOLT (@1)', -178],
    ['VOLT 6.3,(@1),3', -108],
    ['*IDN? 1', -108],
    ['VOLT 8.001,(@1)', -222],
    ['VOLT -0.1,(@1)', -222],
    ['VOLT INF,(@1)', -222],
    ['VOLT NAN,(@1)', -222],
    ['VOLT 6.3,(@4)', -222],
    ['VOLT 6.3,(@0)', -222],
    ['VOLT 6.3,(@1:9)', -222],
    ['*ESE 256', -222],
    ['VOLT 6.3 A,(@1)', -131],
    ['VOLT 6.3 XV,(@1)', -131],
    ['VOLT 6.3 ABCDEFGHIJKLM,(@1)', -134],
    ['*ESE 5 V', -138],
    ['VOLT 6.3.1,(@1)', -121],
    ['VOLT --6,(@1)', -121],
    ['VOLT 6 3,(@1)', -103],
    ['VOLT 1E99999,(@1)', -123],
    [`VOLT 1${'0'.repeat(256)},(@1)`, -124],
    ['VOLT ON,(@1)', -141],
    ['*ESE ON', -148],
    ['VOLT "6.3",(@1)', -158],
    ['VOLT #16xxxxxx,(@1)', -168],
    ['VOLT #X,(@1)', -161],
    ['VOLT 6.3,(1)', -171],
    ['VOLT 6.3,(@1,2', -171],
    ['VOLT 6.3,(@a)', -171],
    ['VOLT 6.3,@1', -101],
    ['VOLT 6.3,"1', -151],
    ['VOLT ,(@1)', -102],
    ['OUTP MAYBE,(@1)', -224],
    ['OUTP:POL SIDEWAYS,(@3)', -224],
    ['OUTP:POL 1,(@3)', -128],
    ['VOLT? FULL,(@1)', -224],
    ['VOLT 6.3,1', -128],
  ])('answers %j with %i', (message, code) => {
    expect(errorOf(message)).toBe(code)
    expect(supply('VOLT? (@1)')).toBe('0.000')
  })

  it('reads binary, octal and hexadecimal numbers', () => {
    expect(supply('*ESE #H3C;*ESE?;*ESE #Q74;*ESE?;*ESE #B111100;*ESE?')).toBe('60;60;60')
  })

  it('reads lists and ranges of channels in the order they are given', () => {
    supply('VOLT 1,(@1);VOLT 2,(@2);VOLT 3,(@3)')
    expect(supply('VOLT? (@3,1:2)')).toBe('3.000,1.000,2.00')
    expect(supply('VOLT? (@3:1)')).toBe('3.000,2.00,1.000')
  })

  it('changes no channel when one of them is out of range', () => {
    expect(errorOf('VOLT 20,(@2,1)')).toBe(-222)
    expect(supply('VOLT? (@2)')).toBe('0.00')
  })

  it('answers with the range of a setting', () => {
    expect(supply('VOLT? MAX,(@1,2,3);:CURR? MAX,(@1,2,3)')).toBe('8.000,350.00,30.000;2.000,0.02000,3.5000')
  })

  it('keeps separators inside quotes and parentheses together', () => {
    expect(errorOf("VOLT 'a;b',(@1)")).toBe(-158)
  })
})

describe('any bytes', () => {
  it('never throws, always answers, and never changes an output by accident', () => {
    fc.assert(
      fc.property(fc.string({ unit: 'binary', maxLength: 80 }), (text) => {
        supply(text.replaceAll(/volt|curr|outp|sour|rst/gi, ''))
        expect(supply('*OPC?')).toBe('1')
        expect(supply('OUTP? (@1:3)')).toBe('0,0,0')
      }),
      { numRuns: 500, seed: 13 },
    )
  })

  it('reads what is made of parts of messages without throwing', () => {
    const part = fc.constantFrom(
      'VOLT',
      'MEAS:VOLT?',
      ' ',
      ',',
      ';',
      ':',
      '(@1',
      '(@1)',
      ')',
      '"',
      '#',
      '5',
      'E',
      '-',
      '*',
      '?',
    )
    fc.assert(
      fc.property(fc.array(part, { maxLength: 14 }), (parts) => {
        supply(parts.join(''))
        expect(supply('*OPC?')).toBe('1')
      }),
      { numRuns: 1000, seed: 14 },
    )
  })
})
