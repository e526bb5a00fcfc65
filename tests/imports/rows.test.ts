import { describe, expect, it } from 'vitest'
import { guessColumns } from '#app/imports/guess.ts'
import type { ColumnMapping } from '#app/imports/mapping.ts'
import { mappingProblems, type RowMapping, readRows } from '#app/imports/rows.ts'
import { uncertaintyOf } from '#app/imports/values.ts'
import { expectNear } from '#tests/support/near.ts'

const column = (text: string): ColumnMapping | null => {
  const [role, unit = ''] = text.split(' ')
  return role ? { role: role as ColumnMapping['role'], unit } : null
}
const mapping = (columns: string[], changes: Partial<RowMapping> = {}): RowMapping => ({
  decimal: '.',
  columns: columns.map(column),
  forAll: { voltage: '', current: '', length: '' },
  statedAs: 'standard',
  ...changes,
})
const target = { isReversible: false, rungs: [] }
const rungs = [
  { name: '6 cm', distanceMetres: 0.06 },
  { name: 'outermost', distanceMetres: 0.08 },
]
const plain = ['voltage V', 'current A', 'diameter cm']
const read = (
  cells: string[],
  columns = plain,
  changes: Partial<RowMapping> = {},
  to: Parameters<typeof readRows>[2] = target,
) => readRows([{ line: 2, cells }], mapping(columns, changes), to)
const one = (...rest: Parameters<typeof read>) => {
  const { good, bad } = read(...rest)
  if (!good[0]) throw new Error(JSON.stringify(bad))
  return good[0]
}
const reasons = (...rest: Parameters<typeof read>) => read(...rest).bad[0]?.reasons

describe('what the columns hold', () => {
  it.each<[string[], (string | null)[]]>([
    [
      ['V', 'I', 'd'],
      ['voltage V', 'current A', 'diameter '],
    ],
    [['V (V)', 'I (A)', 'd (cm)'], plain],
    [
      ['U / V', 'I / mA', 'd / mm'],
      ['voltage V', 'current mA', 'diameter mm'],
    ],
    [
      ['#', 'anode voltage [kV]', 'coil current', 'radius_cm'],
      [null, 'voltage kV', 'current A', 'radius cm'],
    ],
    [
      ['V', 'u_V', 'I', 'u_I_A', 'd_cm', 'u_d_cm'],
      ['voltage V', 'uVoltage V', 'current A', 'uCurrent A', 'diameter cm', 'uLength cm'],
    ],
    [
      ['V', 'u(V)', 'ΔI', 'I', 'err d'],
      ['voltage V', 'uVoltage V', 'uCurrent A', 'current A', 'uLength '],
    ],
    [
      ['voltage', 'current', 'left edge cm', 'right edge cm', 'remarks'],
      ['voltage V', 'current A', 'left cm', 'right cm', null],
    ],
    [
      ['V', 'I', 'rung', 'moved / A'],
      ['voltage V', 'current A', 'rung ', 'halfWidth A'],
    ],
    [
      ['V', 'V', 'I'],
      ['voltage V', null, 'current A'],
    ],
    [
      ['', ''],
      [null, null],
    ],
  ])('is guessed from %j', (headings, expected) => {
    expect(guessColumns(headings).map((it) => it && `${it.role} ${it.unit}`)).toEqual(expected)
  })
})

describe('a mapping', () => {
  const problems = (columns: string[], to = target) => mappingProblems(mapping(columns), to).join(' ')

  it.each([
    [['voltage V'], 'coil current'],
    [['current A', 'diameter cm'], 'anode voltage'],
    [['voltage V', 'current A'], 'holds the diameter'],
    [[...plain, 'radius cm'], 'in one of these ways'],
    [['voltage V', 'current A', 'left cm'], 'Both edges need a column each.'],
    [['voltage V', 'current A', 'rung'], 'Rungs need a bench that has rungs'],
    [[...plain, 'voltage V'], 'Two columns hold the anode voltage'],
  ])('%j has a problem: %s', (columns, words) => {
    expect(problems(columns)).toContain(words)
  })

  it('has none with one way to the diameter', () => {
    expect(problems(plain)).toBe('')
    expect(problems(['voltage V', 'current A', 'left cm', 'right cm'])).toBe('')
    expect(mappingProblems(mapping(['voltage V', 'current A', 'rung']), { ...target, rungs })).toEqual([])
  })
})

describe('a row', () => {
  it('is read in the units of its columns', () => {
    const row = one(['0.15', '1540', '81'], ['voltage kV', 'current mA', 'diameter mm'])
    expect([row.voltage.value, row.current.value]).toEqual([150, 1.54])
    expect(row.width).toMatchObject({ kind: 'diameter', diameter: { value: 0.081 } })
  })

  it('has the last digit where nothing is stated: half of it either way (rectangular, JCGM 100:2008, F.2.2.1)', () => {
    const { voltage, current, width } = one(['150.0', '1.54', '8.1'])
    expect(voltage).toMatchObject({ lastDigit: 0.1, standardUncertainty: null })
    expectNear(uncertaintyOf(current), 0.01 / Math.sqrt(12), { rel: 1e-12 })
    if (width.kind !== 'diameter') throw new Error('No diameter')
    expectNear(uncertaintyOf(width.diameter), 0.001 / Math.sqrt(12), { rel: 1e-12 })
  })

  it('doubles a radius and what is stated of it', () => {
    const { width } = one(
      ['150', '1.54', '4.05', '0.1'],
      ['voltage V', 'current A', 'radius cm', 'uLength cm'],
    )
    expect(width).toMatchObject({ diameter: { value: 0.081, standardUncertainty: 0.002 } })
  })

  it('takes the difference of two edges, each with its uncertainty', () => {
    const { width } = one(['150', '1.54', '2.1', '10.2'], ['voltage V', 'current A', 'left cm', 'right cm'], {
      forAll: { voltage: '', current: '', length: '0.05' },
    })
    if (width.kind !== 'diameter') throw new Error('No diameter')
    expect(width.edges).toEqual({ leftMetres: 0.021, rightMetres: 0.102 })
    expectNear(width.diameter.value, 0.081, { rel: 1e-12 })
    expectNear(width.diameter.standardUncertainty ?? 0, 0.0005 * Math.SQRT2, { rel: 1e-12 })
  })

  it.each([
    ['standard', 1],
    ['bounds', Math.sqrt(3)],
    ['expanded', 2],
  ] as const)(
    'has uncertainties stated as %s: divided by %d (JCGM 100:2008, 4.3.3 and 4.3.7)',
    (statedAs, divisor) => {
      const { voltage } = one(['150', '1.54', '8.1'], plain, {
        statedAs,
        forAll: { voltage: '1,2', current: '', length: '' },
      })
      expectNear(voltage.standardUncertainty ?? 0, 1.2 / divisor, { rel: 1e-12 })
    },
  )

  it('prefers the column of uncertainties to the one for all', () => {
    const { voltage } = one(
      ['150', '2', '1.54', '8.1'],
      ['voltage V', 'uVoltage V', 'current A', 'diameter cm'],
      {
        forAll: { voltage: '1', current: '', length: '' },
      },
    )
    expect(voltage.standardUncertainty).toBe(2)
  })

  it('has the reversed sense by the sign of its current, where the bench can be reversed', () => {
    expect(one(['150', '-1.54', '8.1'], plain, {}, { ...target, isReversible: true }).current.value).toBe(
      -1.54,
    )
    expect(reasons(['150', '-1.54', '8.1'])).toEqual([
      'coil current: “-1.54” has to be above 0: this bench has one sense of the current',
    ])
  })

  it('has a rung by its name or by its distance', () => {
    const columns = ['voltage V', 'current A', 'rung cm', 'halfWidth A']
    const to = { ...target, rungs }
    expect(one(['150', '1.54', 'Outermost', '0.02'], columns, {}, to).width).toEqual({
      kind: 'rung',
      rung: 'outermost',
      settingHalfWidthAmps: 0.02,
    })
    expect(one(['150', '1.54', '6', '0'], columns, {}, to).width).toMatchObject({ rung: '6 cm' })
    expect(reasons(['150', '1.54', '7', '0'], columns, {}, to)).toEqual([
      'rung: “7” is none of 6 cm, outermost',
    ])
  })

  it.each<[string[], string]>([
    [['0', '1.54', '8.1'], 'anode voltage: “0” has to be above 0'],
    [['-150', '1.54', '8.1'], 'anode voltage: “-150” has to be above 0'],
    [['150', '0', '8.1'], 'coil current: “0” has to be above 0: this bench has one sense of the current'],
    [['150', '1.54', '0'], 'diameter: “0” has to be above 0'],
    [['150', '1.54', '-8'], 'diameter: “-8” has to be above 0'],
    [['NaN', '1.54', '8.1'], 'anode voltage: “NaN” is not a number'],
    [['150', 'inf', '8.1'], 'coil current: “inf” is not a number'],
    [['150', '1.54', ''], 'diameter: is empty'],
    [['=1+1', '1.54', '8.1'], 'anode voltage: “=1+1” is not a number'],
  ])('%j is bad: %s', (cells, reason) => {
    expect(reasons(cells)).toEqual([reason])
  })

  it('is bad without a unit, and with all its reasons at once', () => {
    expect(reasons(['150', '1.54', '8.1'], ['voltage V', 'current A', 'diameter '])).toEqual([
      'diameter: has no unit: choose it',
    ])
    expect(reasons(['x', '', '8.1'])).toHaveLength(2)
    const u = ['voltage V', 'uVoltage V', 'current A', 'diameter cm']
    expect(reasons(['150', '0', '1.54', '8.1'], u)).toEqual([
      'uncertainty of the voltage: “0” has to be above 0',
    ])
    expect(reasons(['150', '', '1.54', '8.1'], u)).toEqual(['uncertainty of the voltage: is empty'])
    expect(reasons(['150', '1.54', '9', '8'], ['voltage V', 'current A', 'left cm', 'right cm'])).toEqual([
      'right edge: has to stand to the right of the left edge',
    ])
    const forAll = { voltage: '0', current: '', length: '' }
    expect(reasons(['150', '1.54', '8.1'], plain, { forAll })?.[0]).toContain(
      'leave it empty where none is known',
    )
  })
})
