import { describe, expect, it } from 'vitest'
import { doubts, measureMarks, readMarks, readScaleNumber, type TypedMarks } from '#app/runs/photo-marks.ts'
import { expectNear } from '#tests/support/near.ts'

const photo = { width: 1400, height: 1400 }
const scale = { lengthMetres: 0.12, graduationMetres: 0.001 }

/** A circle of 8 cm at 100 px/cm, above a scale whose zero stands at x = 100. */
const around = (...degrees: number[]) =>
  degrees.map((angle) => ({
    x: 700 + 400 * Math.cos((angle * Math.PI) / 180),
    y: 500 + 400 * Math.sin((angle * Math.PI) / 180),
  }))
const places = [0, 12, 5, 8]
const lines = (...numbers: string[]) =>
  numbers.map((centimetres, i) => ({ x: 100 + 100 * (places[i] ?? 0), y: 1200, centimetres }))
const marks: TypedMarks = { scaleMarks: lines('0', '12'), points: around(0, 60, 120, 180, 240, 300) }
const measure = (change: Partial<TypedMarks>) => measureMarks({ ...marks, ...change }, { photo, scale })

describe('Marks on a photo', () => {
  it('give the diameter, with numbers typed in cm with either decimal mark', () => {
    const { measured } = measure({ scaleMarks: lines('0,0', '12.00') })
    expectNear(measured?.measurement.diameterMetres ?? 0, 0.08, { rel: 1e-9 })
    expect(measured?.scaleMarks.map(({ scaleMetres }) => scaleMetres)).toEqual([0, 0.12])
  })

  it.each<[string, Partial<TypedMarks>]>([
    ['Mark two lines of the scale or more, far apart, and type what each reads.', { scaleMarks: lines('0') }],
    ['Type what each scale mark reads, in cm.', { scaleMarks: lines('0', '') }],
    ['Type what each scale mark reads, in cm.', { scaleMarks: lines('0', '12 cm') }],
    ['Type what each scale mark reads, in cm.', { scaleMarks: lines('0', '13') }],
    [
      'All scale marks read the same. Mark two lines of the scale that lie far apart.',
      { scaleMarks: lines('4', '4.0') },
    ],
    [
      'The scale marks lie on one another. Set each on its own line.',
      { scaleMarks: lines('0', '12').map((mark) => ({ ...mark, x: 3 })) },
    ],
    [
      'The scale marks contradict each other. Look whether each has its own number.',
      { scaleMarks: [0, 100, 100, 0].map((x, i) => ({ x, y: 9, centimetres: String(i < 2 ? 0 : 5) })) },
    ],
    ['Mark three points of the beam or more, all around it: 2 so far.', { points: around(0, 90) }],
    [
      'These points lie nearly on a line, and give no circle. Mark points all around the beam.',
      { points: [1, 2, 3].map((i) => ({ x: 100 * i, y: 50 * i })) },
    ],
    [
      'These points lie nearly on a line, and give no circle. Mark points all around the beam.',
      { points: around(0, 4, 8) },
    ],
    ['A mark lies outside the photo.', { points: [...around(0, 90), { x: 1400.5, y: 0 }] }],
    ['A mark lies outside the photo.', { scaleMarks: [...lines('0'), { x: -1, y: 0, centimetres: '3' }] }],
  ])('say what is wanting: %s', (sentence, change) => {
    expect(measure(change)).toEqual({ measured: null, sentence })
  })

  it('are doubted, in words, when they cover little of the circle', () => {
    const { measured } = measure({ points: around(0, 45, 90) })
    expect(measured && doubts(measured, scale)).toEqual([
      'The points cover only 90° of the circle. Mark points all around it: the diameter becomes far more certain.',
    ])
  })

  it('are doubted when one of the scale stands off by more than half a division', () => {
    const { measured } = measure({ scaleMarks: lines('0', '12', '5', '8.5') })
    expect(measured && doubts(measured, scale)).toEqual([
      expect.stringMatching(/^The scale mark at 8\.5 cm stands [34]\.\d mm off where the others put it\./),
    ])
    const { measured: even } = measure({ scaleMarks: lines('0', '12', '5', '8') })
    expect(even && doubts(even, scale)).toEqual([])
  })
})

describe('A beam seen from aside', () => {
  it('is doubted, with how much the diameters of the ellipse differ', () => {
    const points = around(0, 50, 100, 150, 200, 250, 300, 330).map(({ x, y }) => ({
      x: 700 + (x - 700) * 0.96,
      y,
    }))
    const { measured } = measure({ points })
    expect(measured && doubts(measured, scale)).toEqual([
      expect.stringMatching(/^The points lie on an ellipse, whose diameters differ by 3\.\d mm: /),
    ])
  })
})

describe('The number of a scale mark', () => {
  it.each([
    ['7.35', 0.0735],
    ['7,35', 0.0735],
    ['0', 0],
    ['12', 0.12],
  ])('%j is read in metres', (typed, metres) => {
    expect(readScaleNumber(typed, scale)).toEqual({ metres, error: null })
  })

  it.each([
    ['', 'Type what this mark reads in centimetres.'],
    ['12.1', 'The scale goes from 0 to 12 cm.'],
    ['-1', 'The scale goes from 0 to 12 cm.'],
    ['3 cm', 'Type only the number of centimetres: “3 cm” has something behind it.'],
  ])('%j is refused: %s', (typed, error) => {
    expect(readScaleNumber(typed, scale)).toEqual({ metres: null, error })
  })
})

describe('The field of marks', () => {
  const formOf = (value: string) => {
    const form = new FormData()
    form.set('marks', value)
    return form
  }

  it('is read as the page sends it', () => {
    expect(readMarks(formOf(JSON.stringify(marks)))).toEqual(marks)
  })

  it.each([
    ['no field', new FormData()],
    ['no JSON', formOf('{')],
    ['another shape', formOf('[]')],
    ['text for a place', formOf('{"scaleMarks":[],"points":[{"x":"1","y":2}]}')],
    ['a place that is no number', formOf('{"scaleMarks":[],"points":[{"x":1e999,"y":2}]}')],
    [
      'more points than anyone sets',
      formOf(JSON.stringify({ scaleMarks: [], points: Array(301).fill({ x: 1, y: 1 }) })),
    ],
  ])('with %s is none', (_, form) => {
    expect(readMarks(form)).toBeNull()
  })
})
