import fc from 'fast-check'
import { afterEach, describe, expect, it } from 'vitest'
import { evaluate } from '#app/relation/evaluate.ts'
import { type Expression, functionNames, print } from '#app/relation/expression.ts'
import { longestFormula } from '#app/relation/limits.ts'
import { FormulaProblem } from '#app/relation/problem.ts'
import { type Quantity, quantities, type Values } from '#app/relation/quantities.ts'
import { readFormula } from '#app/relation/read-formula.ts'
import { readSymbols } from '#app/relation/symbols.ts'
import { symbols } from './formulas.ts'

const values: Values = {
  anodeVoltage: 200,
  coilCurrent: 1.5,
  beamDiameter: 0.08,
  beamRadius: 0.04,
  turns: 130,
  coilRadius: 0.15,
  coilSeparation: 0.2,
  magneticConstant: 1.25e-6,
}
const read = (text: string) => readFormula(text, symbols)
const valueFrom = (text: string) => evaluate(read(text), values)

function problemOf(text: string): FormulaProblem {
  try {
    read(text)
  } catch (error) {
    if (error instanceof FormulaProblem) return error
    throw error
  }
  throw new Error(`${text} was read`)
}

describe('A formula is read', () => {
  it.each<[text: string, value: number]>([
    ['2 V', 400],
    ['2V', 400],
    ['V I', 300],
    ['N(R)', 130 * 0.15],
    ['2 V (1/4)', 100],
    ['2 π I (1/π)', 3],
    ['V I sqrt(4)', 600],
    ['V 2', 400],
    ['I²(4)', 9],
    ['2 / I (4)', 1 / 3],
    ['V(1/4)^2', 12.5],
    ['1/2 V', 100],
    // A product without a sign binds more tightly than a division, as it is printed.
    ['V / I N', 200 / (1.5 * 130)],
    ['V / I * N', (200 / 1.5) * 130],
    ['-I^2', -2.25],
    ['(-I)^2', 2.25],
    ['2^3^2', 512],
    ['I²', 2.25],
    ['I⁻²', 1 / 2.25],
    ['2¹⁰', 1024],
    ['√(V + 25)', 15],
    ['sqrt(V) · sqrt(V)', 200],
    ['cbrt(8) + abs(-2) + ln(exp(3))', 7],
    ['sin(π/2) + cos(0) + tan(pi/4)', 3],
    ['V − 50 × 2 ÷ 4', 175],
    ['+V', 200],
    ['1.5e2 + .5', 150.5],
    ['μ₀ + µ0 + μ0', 3.75e-6],
    ['𝑉', 200],
    ['V\n+\tV', 400],
  ])('%s', (text, value) => {
    expect(Math.abs(valueFrom(text) / value - 1)).toBeLessThan(1e-12)
  })

  it('and printed so that it is read the same again', () => {
    const leaf = fc.oneof(
      fc
        .constantFrom(...quantities)
        .map((quantity: Quantity): Expression => ({ kind: 'quantity', quantity, symbol: symbols[quantity] })),
      fc.double({ min: 0, max: 1e6, noNaN: true }).map((value): Expression => ({ kind: 'number', value })),
    )
    const { tree } = fc.letrec<{ tree: Expression }>((tie) => ({
      tree: fc.oneof(
        { maxDepth: 4 },
        leaf,
        tie('tree').map((of): Expression => ({ kind: 'negative', of })),
        fc
          .tuple(fc.constantFrom(...functionNames), tie('tree'))
          .map(([name, of]): Expression => ({ kind: 'function', name, of })),
        fc
          .tuple(fc.constantFrom('+', '-', '*', '/', '^'), tie('tree'), tie('tree'))
          .map(([operator, left, right]): Expression => ({ kind: 'operation', operator, left, right })),
      ),
    }))
    fc.assert(
      fc.property(tree, (expression) => {
        fc.pre(print(expression).length < longestFormula)
        expect(read(print(expression))).toEqual(expression)
      }),
      { seed: 20_261_204, numRuns: 500 },
    )
  })
})

describe('What is not read is refused with the reason:', () => {
  it.each<[text: string, code: string, words: string]>([
    ['', 'empty', 'Type what e/m is equal to.'],
    [' \n', 'empty', 'Type'],
    ['e/m = 2 V', 'equals-sign', 'to the right of the equals sign'],
    ['2,5 V', 'comma', 'decimal point'],
    ['√2 V', 'character', 'brackets behind the root'],
    ['[V]', 'character', 'round brackets'],
    ['½ V', 'character', '⁄'],
    ['NI', 'unknown-symbol', 'between N and I'],
    ['μ0NI', 'unknown-symbol', 'between μ0 and N and I'],
    ['2 V/(B r)²', 'unknown-symbol', 'B is not one of your symbols'],
    ['2 V (R', 'unreadable', 'ends before it is complete'],
    ['2 V *', 'unreadable', 'ends before it is complete'],
    ['2 V) R', 'unreadable', 'The “)” behind “2 V”'],
    ['(V)^3 2', 'unreadable', 'The “2” behind “(V)^3” cannot be read'],
    ['1..2', 'unreadable', 'cannot be read'],
    ['sqrt', 'function', 'Put brackets behind sqrt'],
    ['sqrt V', 'function', 'Put brackets behind sqrt'],
    ['sqrt()', 'function', 'one thing in its brackets'],
    ['log(V)', 'function', 'log is not a function here'],
    ['1e400 V', 'number', 'too large for one'],
    ['NaN', 'number', 'not a number'],
    ['Infinity V', 'number', 'not a number'],
    ['0x10 V', 'number', 'decimal'],
    ['V mod R', 'not-arithmetic', 'A formula holds'],
    ['V in R', 'not-arithmetic', 'A formula holds'],
    ['not V', 'not-arithmetic', 'A formula holds'],
    ['true', 'not-arithmetic', 'A formula holds'],
    ['null', 'not-arithmetic', 'A formula holds'],
    ['V.R', 'not-arithmetic', 'A formula holds'],
    ['V .* R', 'not-arithmetic', 'A formula holds'],
    ['5!', 'character', '!'],
    ["V'", 'character', "'"],
  ])('%s', (text, code, words) => {
    expect(problemOf(text)).toMatchObject({ code })
    expect(problemOf(text).message).toContain(words)
  })
})

describe('A hostile formula', () => {
  afterEach(() => {
    expect((globalThis as { broken?: unknown }).broken).toBeUndefined()
    expect(({} as { broken?: unknown }).broken).toBeUndefined()
  })

  it.each<[text: string, code: string]>([
    ['constructor', 'unknown-symbol'],
    ['__proto__', 'unknown-symbol'],
    ['toString', 'unknown-symbol'],
    ['constructor(V)', 'function'],
    ['V.constructor', 'not-arithmetic'],
    ['V.constructor(R)', 'not-arithmetic'],
    ['V.__proto__.broken', 'not-arithmetic'],
    ['sqrt.constructor(V)(R)', 'not-arithmetic'],
    ['V["constructor"]', 'character'],
    ['import("node:fs")', 'character'],
    ['import(V)', 'function'],
    ['require(V)', 'function'],
    ['eval(V)', 'function'],
    ['evaluate("broken = 1")', 'character'],
    ['parse(V)', 'function'],
    ['createUnit(V)', 'function'],
    ['f(x) = x', 'equals-sign'],
    ['globalThis.broken = 1', 'equals-sign'],
    ['V; R', 'character'],
    ['1:1000000000', 'character'],
    ['{V: 1}', 'character'],
    ['"text"', 'character'],
    ['`V`', 'character'],
    ['V ? R : s', 'character'],
    ['V | R', 'character'],
    ['V # R', 'character'],
    ['V\u0000', 'character'],
    ['V\u202eR', 'character'],
    ['zeros(10^9)', 'function'],
    ['5 cm', 'unknown-symbol'],
  ])('is refused for what it is: %s', (text, code) => {
    expect(problemOf(text)).toMatchObject({ code })
  })

  it.each<[what: string, text: string, code: string]>([
    ['10 kB of text', 'V + '.repeat(2500), 'too-long'],
    ['one character too long', `${'V+'.repeat(longestFormula / 2)}V`, 'too-long'],
    ['raised digits that grow when they are written out', 'V²'.repeat(199), 'too-long'],
    ['deep brackets', `${'('.repeat(199)}V${')'.repeat(199)}`, 'too-deep'],
    ['deep functions', `${'abs('.repeat(60)}V${')'.repeat(60)}`, 'too-deep'],
    ['a tower of powers', `${'2^'.repeat(199)}2`, 'too-many-parts'],
    ['a row of signs', `${'-'.repeat(398)}V`, 'too-many-parts'],
    ['a long sum', `${'V+'.repeat(198)}V`, 'too-many-parts'],
    ['a long product', 'V '.repeat(199), 'too-many-parts'],
  ])('is bounded: %s', (_, text, code) => {
    expect(problemOf(text)).toMatchObject({ code })
  })

  it('names no symbol of the parser, of its functions or of objects', () => {
    const { symbols: read, errors } = readSymbols({
      anodeVoltage: '__proto__',
      coilCurrent: 'sqrt',
      beamDiameter: 'd d',
      beamRadius: 'V.x',
      turns: 'N'.repeat(13),
      coilRadius: 'NaN',
      coilSeparation: '2s',
      magneticConstant: 'μ₀',
    })
    expect(read).toEqual({ magneticConstant: 'μ0' })
    expect(Object.keys(errors)).toHaveLength(7)
  })

  it('may call a symbol constructor, and it is a symbol', () => {
    const own = readSymbols({ anodeVoltage: 'constructor', coilCurrent: 'toString' }).symbols
    expect(evaluate(readFormula('constructor / toString', own), values)).toBe(200 / 1.5)
  })
})

describe('The symbols of a person', () => {
  it('stand for one thing each, however they are typed', () => {
    const { errors } = readSymbols({ beamDiameter: 'μ₀', magneticConstant: 'µ0' })
    expect(errors).toEqual({ magneticConstant: 'μ0 stands for something else already.' })
  })

  it('may be left out', () => {
    expect(readSymbols({ anodeVoltage: ' U ', turns: '' })).toEqual({
      symbols: { anodeVoltage: 'U' },
      errors: {},
    })
  })
})
