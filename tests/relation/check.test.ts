import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { checkRelation } from '#app/relation/check.ts'
import type { Symbols } from '#app/relation/quantities.ts'
import { readSymbols } from '#app/relation/symbols.ts'
import { chance, rightFormulas, symbols } from './formulas.ts'

const check = (text: string, over: Partial<Symbols> = {}, seed = 1) =>
  checkRelation({ text, symbols: { ...symbols, ...over }, random: chance(seed) })

describe('A relation that is right', () => {
  it.each(rightFormulas)('holds in any shape: %s', (text) => {
    for (const seed of [1, 2, 3]) expect(check(text, {}, seed)).toMatchObject({ holds: true, findings: [] })
  })

  it('holds in anybody’s symbols', () => {
    const typed = { anodeVoltage: 'U_A', coilCurrent: 'i', beamRadius: 'ρ', turns: 'n', coilRadius: 'a' }
    const own = readSymbols({ ...typed, magneticConstant: 'mu_0' })
    expect(own.errors).toEqual({})
    const asked = { text: '2 U_A (5/4)^3 a^2/(mu_0 n i ρ)^2', symbols: own.symbols, random: chance(4) }
    expect(checkRelation(asked).holds).toBe(true)
  })

  it('says whether it takes the coils to be as far apart as their radius', () => {
    expect(check('2 V (5/4)³ R² / (μ₀ N I r)²').isHelmholtz).toBe(true)
    expect(check('2 V (R² + s²/4)³ / (μ0 N I R² r)²').isHelmholtz).toBe(false)
  })

  it('is shown as it was read', () => {
    expect(check('2V (5/4)³ R²/(μ₀ N I r)²').readAs).toBe('2·V·(5 / 4)³·R² / (μ0·N·I·r)²')
  })

  it('holds at every draw, and with any constant factor at none', () => {
    fc.assert(
      fc.property(
        fc.constantFrom(...rightFormulas),
        fc.integer({ min: 0, max: 2 ** 40 }),
        fc.double({ min: 0.01, max: 100, noNaN: true }).filter((factor) => Math.abs(factor - 1) > 0.003),
        (text, seed, factor) => {
          expect(check(text, {}, seed).holds).toBe(true)
          expect(check(`${factor.toFixed(6)} · (${text})`, {}, seed).holds).toBe(false)
        },
      ),
      { seed: 20_261_201, numRuns: 150 },
    )
  })
})

describe('A slip is named by its kind:', () => {
  it.each<[slip: string, formula: string, kinds: string[]]>([
    ['a factor of 2', 'V (5/4)³ R² / (μ₀ N I r)²', ['factor']],
    ['a factor of 8', '16 V (R² + s²/4)³ / (μ0 N I R² r)²', ['factor']],
    ['a factor of π', '2 π V (5/4)³ R² / (μ₀ N I r)²', ['factor']],
    ['the turns of both coils', '8 V (5/4)³ R² / (μ₀ N I d)² · 4', ['factor']],
    ['a rounded number', '2 V / (0.716 μ0 N I r/R)²', ['rounded']],
    ['a minus sign', '-2 V (5/4)³ R² / (μ₀ N I r)²', ['sign']],
    ['a minus sign and a factor', '-V (5/4)³ R² / (μ₀ N I r)²', ['sign', 'factor']],
    ['diameter for radius', '2 V (5/4)³ R² / (μ₀ N I d)²', ['diameter-for-radius']],
    ['radius for diameter', '8 V (5/4)³ R² / (μ₀ N I r)²', ['radius-for-diameter']],
    ['diameter for radius of the coils', '2 V (R²/4 + s²/4)³ / (μ0 N I R² r/4)²', ['coil-diameter']],
    ['turns forgotten', '2 V (5/4)³ R² / (μ₀ I r)²', ['absent']],
    ['turns forgotten, any separation', '2 V (R² + s²/4)³ / (μ0 I R² r)²', ['absent']],
    ['turns not squared', '2 V (5/4)³ R² / (N (μ₀ I r)²)', ['power']],
    ['(4/5)^(3/2) forgotten', '2 V R² / (μ₀ N I r)²', ['coil-factor-forgotten']],
    ['(4/5)^(3/2) inverted', '2 V (4/5)³ R² / (μ₀ N I r)²', ['coil-factor-inverted']],
    ['(4/5)^(3/2) not squared', '2 V (5/4)^(3/2) R² / (μ₀ N I r)²', ['coil-factor']],
    ['(4/5)^(3/2) squared twice', '2 V (5/4)^6 R² / (μ₀ N I r)²', ['coil-factor']],
    ['(4/5)^(3/2) forgotten and a 2', 'V R² / (μ₀ N I r)²', ['coil-factor-forgotten', 'factor']],
    [
      '(4/5)^(3/2) beside the separation',
      '2 V (5/4)³ (R² + s²/4)³ / (μ0 N I R² r)²',
      ['coil-factor-needless'],
    ],
    ['separation for radius', '2 V (5/4)³ s² / (μ₀ N I r)²', ['separation-for-radius']],
    ['separation and radius mixed', '2 V (5/4)³ R s / (μ₀ N I r)²', ['separation-with-radius']],
    ['the separation for its half', '2 V (R² + s²)³ / (μ0 N I R² r)²', ['half-separation']],
    ['a quarter of the separation', '2 V (R² + s²/16)³ / (μ0 N I R² r)²', ['half-separation']],
    ['a wrong sum', '2 V (R² + s²/3)³ / (μ0 N I R² r)²', ['shape', 'shape']],
    ['V in the denominator', '2 (5/4)³ R² / (V (μ₀ N I r)²)', ['unit', 'wrong-side']],
    ['V left out', '2 (5/4)³ R² / (μ₀ N I r)²', ['unit', 'absent']],
    ['V squared', '2 V² (5/4)³ R² / (μ₀ N I r)²', ['unit', 'power']],
    ['the current not squared', '2 V (5/4)³ R² / (I (μ₀ N r)²)', ['unit', 'power']],
    ['the field not squared', '2 V (5/4)^(3/2) R / (μ₀ N I r²)', ['unit', 'field-power']],
    ['the beam’s radius not squared', '2 V (5/4)³ R² / (r (μ₀ N I)²)', ['unit', 'power']],
    ['μ₀ as a bare number', '2 V (5/4)³ R² / (4 π 10^-7 N I r)²', ['unit', 'absent']],
    ['m/e', '(μ₀ N I r)² / (2 V (5/4)³ R²)', ['unit', 'inverted']],
    ['m/e, any separation', '(μ0 N I R² r)² / (2 V (R² + s²/4)³)', ['unit', 'inverted']],
    ['the root of it', 'sqrt(2 V (5/4)³) R / (μ₀ N I r)', ['unit', 'whole-power']],
    ['beam and coils exchanged', '2 V (5/4)³ r² / (μ₀ N I R)²', ['wrong-side', 'wrong-side']],
    ['a sum of unlike things', '2 V (R + s²/4)³ / (μ0 N I R² r)²', ['unlike-sum']],
    ['a unit in an exponent', '2 V (5/4)^V R² / (μ₀ N I r)²', ['exponent']],
    ['something subtracted from itself', 'V/(μ0 N I)² - V/(μ0 N I)²', ['shape']],
  ])('%s', (_, text, kinds) => {
    const { holds, findings } = check(text)
    expect(findings.map(({ code }) => code)).toEqual(kinds)
    expect(holds).toBe(false)
  })

  it('without what would be right, and without a number', () => {
    for (const text of ['V (5/4)³ R² / (μ₀ N I r)²', '2 V R² / (μ₀ N I r)²', '2 V R² (4/5)³ / (μ₀ N I r)²'])
      for (const { sentence } of check(text).findings) expect(sentence).not.toMatch(/4\/5|5\/4|\^|125|0\.\d/)
  })

  it('with the place where unlike things are added', () => {
    const [finding] = check('2 V (R + s²/4)³ / (μ0 N I R² r)²').findings
    expect(finding?.sentence).toBe('In “R + s² / 4” unlike things are added: “R” is in m, “s² / 4” is in m².')
  })

  it('with the unit that comes out', () => {
    expect(check('2 V (5/4)³ R / (μ₀ N I r)²').findings[0]?.sentence).toBe(
      'Its unit comes out as s·A/(kg·m), and that of e/m is C/kg.',
    )
  })

  it('with the quantities that it does without, in one sentence', () => {
    const { findings } = check('2 V R² / (μ₀ r)²')
    expect(findings.map(({ code }) => code)).toEqual(['unit', 'absent'])
    expect(findings[1]?.sentence).toMatch(/current through each coil and number of turns of each coil/)
  })
})

describe('Where a formula has no value', () => {
  it.each([
    ['V/(R-R)', 'division-by-zero', 'In “V / (R − R)” something is divided by zero.'],
    ['0/0', 'division-by-zero', 'In “0 / 0” something is divided by zero.'],
    ['sqrt(-V) R', 'root-of-negative', '“sqrt(−V)” has no value'],
    ['(-R)^0.5', 'root-of-negative', '“(−R)^0.5” has no value'],
    ['ln(-2) V', 'root-of-negative', '“ln(−2)” has no value'],
    ['V exp(10^9)', 'not-finite', '“exp(10⁹)” grows beyond'],
    ['V · 9^9^9^9', 'not-finite', '“9^(9⁹)” grows beyond'],
    ['R^(10^308)', 'power-too-large', 'The exponent “10^308” of “R”'],
    ['R^(1/0)', 'division-by-zero', 'In “1 / 0”'],
  ])('the place is named: %s', (text, code, words) => {
    const last = check(text).findings.at(-1)
    expect(last).toMatchObject({ code })
    expect(last?.sentence).toContain(words)
  })
})

describe('Whatever is typed', () => {
  it('is answered and never thrown, and does not hold by chance', () => {
    const piece = fc.constantFrom(
      ...['V', 'I', 'R', 's', 'N', 'd', 'r', 'μ0', '2', '.', '1e9', '(', ')', '+', '-', '*', '/', '^', ' '],
      ...['sqrt(', 'exp(', '²', '⁻', '√', ',', '=', '[', "'", '"', ';', ':', 'in', 'constructor', '\n'],
    )
    fc.assert(
      fc.property(fc.array(piece, { maxLength: 60 }), (pieces) => {
        const { holds, findings } = check(pieces.join(''))
        expect(holds).toBe(false)
        expect(findings.length).toBeGreaterThan(0)
      }),
      { seed: 20_261_202, numRuns: 3000 },
    )
    fc.assert(
      fc.property(fc.string({ unit: 'binary', maxLength: 500 }), (text) => {
        expect(check(text).holds).toBe(false)
      }),
      { seed: 20_261_203, numRuns: 1000 },
    )
  })
})
