import { describe, expect, it } from 'vitest'
import { type PhotoDiameter, type Reading, readingBudget } from '#app/analysis/reading.ts'
import { effectiveDegreesOfFreedom } from '#app/metrology/coverage.ts'
import { expectNear } from '#tests/support/near.ts'
import { bottomGun as bench } from './benches.ts'

const reading: Reading = {
  voltageVolts: 250,
  uVoltageVolts: 0.03,
  currentAmps: 1.3,
  uCurrentAmps: 0.0004,
  leftEdges: [],
  rightEdges: [],
}
const photo: PhotoDiameter = {
  diameterMetres: 0.122,
  uCircleMetres: 0.0001,
  circleDegreesOfFreedom: 9,
  uScaleMetres: 0.00008,
  scaleDegreesOfFreedom: 4,
}
const another: PhotoDiameter = { ...photo, diameterMetres: 0.1224, uCircleMetres: 0.0003 }
const edges = { leftEdges: [-0.0612], rightEdges: [0.0608] }
const budget = (change: Partial<Reading>) => readingBudget({ ...reading, ...change, bench })

const inputOf = (result: ReturnType<typeof budget>, name: string) => {
  const { contribution, sensitivity } = result.contributions[name] ?? {
    contribution: Number.NaN,
    sensitivity: 1,
  }
  return contribution / Math.abs(sensitivity)
}

describe('a reading whose diameter comes from a photo', () => {
  const measured = budget({ photos: [photo] })

  it('has e/m as edges with that distance between them have it, parallax taken out', () => {
    const read = budget({ leftEdges: [0.01], rightEdges: [0.132] })
    expectNear(measured.value, read.value, { rel: 1e-12 })
    // (L − δ)/L of this bench: 0.52/0.6.
    expectNear(measured.diameterMetres, (0.122 * 0.52) / 0.6, { rel: 1e-12 })
  })

  it('has circle and scale in place of the edges’ resolution', () => {
    expect(measured.contributions.leftEdgeResolution).toBeUndefined()
    expect(measured.contributions.edgeSpread).toBeUndefined()
    expectNear(inputOf(measured, 'photoCircle'), 0.0001, { rel: 1e-12 })
    expectNear(inputOf(measured, 'photoScale'), 0.00008, { rel: 1e-12 })
    expect(measured.contributions.photoCircle).toMatchObject({ group: 'photo', common: false })
    expect(measured.groups.map(({ name }) => name)).toEqual([
      'anode voltage',
      'coil current',
      'photo',
      'coil pair',
      'beam',
    ])
  })

  it('has ∂(e/m)/∂ of the diameter on the scale as its sensitivity', () => {
    const at = (by: number) =>
      budget({ photos: [{ ...photo, diameterMetres: photo.diameterMetres + by }] }).value
    const slope = (8 * (at(1e-4) - at(-1e-4)) - (at(2e-4) - at(-2e-4))) / 12e-4
    expectNear(measured.contributions.photoCircle?.sensitivity ?? 0, slope, { rel: 1e-6 })
    expectNear(measured.contributions.photoScale?.sensitivity ?? 0, slope, { rel: 1e-6 })
  })

  it('keeps the degrees of freedom of circle and scale (Welch-Satterthwaite, JCGM 100:2008, G.4)', () => {
    const parts = Object.entries(measured.contributions)
    const nu: Record<string, number> = { photoCircle: 9, photoScale: 4 }
    expectNear(
      measured.effectiveDegreesOfFreedom,
      effectiveDegreesOfFreedom(
        parts.map(([, { contribution }]) => contribution),
        parts.map(([name]) => nu[name] ?? Number.POSITIVE_INFINITY),
      ),
      { rel: 1e-12 },
    )
  })

  it('takes the mean of several photos: the uncertainties of their circles as √(Σu²)/n', () => {
    const both = budget({ photos: [photo, another] })
    expectNear(both.diameterMetres, (0.1222 * 0.52) / 0.6, { rel: 1e-12 })
    expectNear(inputOf(both, 'photoCircle'), Math.sqrt(1e-8 + 9e-8) / 2, { rel: 1e-12 })
    // Two people 0.4 mm apart: s = 0.4 mm/√2, of the mean s/√2.
    expectNear(inputOf(both, 'edgeSpread'), 0.0002, { rel: 1e-9 })
    expect(both.contributions.edgeSpread?.group).toBe('photo')
  })
})

describe('a reading of which one person read the edges and another measured a photo', () => {
  const mixed = budget({ ...edges, photos: [another] })

  it('counts both alike, with the spread between them', () => {
    expectNear(mixed.diameterMetres, (((0.122 + 0.1224) / 2) * 0.52) / 0.6, { rel: 1e-12 })
    expectNear(inputOf(mixed, 'edgeSpread'), 0.0002, { rel: 1e-9 })
  })

  it('has each one’s own lines by its half of the mean', () => {
    expectNear(inputOf(mixed, 'photoCircle'), 0.0003 / 2, { rel: 1e-12 })
    expectNear(inputOf(mixed, 'photoScale'), 0.00008 / 2, { rel: 1e-12 })
    // Half a millimetre division, of one reader of two.
    expectNear(inputOf(mixed, 'leftEdgeResolution'), 0.0005 / Math.sqrt(12) / 2, { rel: 1e-12 })
    expectNear(inputOf(mixed, 'rightEdgeResolution'), 0.0005 / Math.sqrt(12) / 2, { rel: 1e-12 })
    const perEdge = mixed.contributions.edgeSpread?.sensitivity ?? 0
    for (const name of ['photoCircle', 'photoScale', 'rightEdgeResolution'])
      expect(mixed.contributions[name]?.sensitivity).toBe(perEdge)
    expect(mixed.groups.map(({ name }) => name)).toEqual([
      'anode voltage',
      'coil current',
      'edges',
      'photo',
      'coil pair',
      'beam',
    ])
  })
})

describe('a photo’s diameter', () => {
  it.each<[string, Partial<PhotoDiameter>]>([
    ['photos[0].diameterMetres', { diameterMetres: 0 }],
    ['photos[0].diameterMetres', { diameterMetres: Number.NaN }],
    ['photos[0].uCircleMetres', { uCircleMetres: -1 }],
    ['photos[0].circleDegreesOfFreedom', { circleDegreesOfFreedom: 0 }],
    ['photos[0].uScaleMetres', { uScaleMetres: Number.POSITIVE_INFINITY }],
    ['photos[0].scaleDegreesOfFreedom', { scaleDegreesOfFreedom: Number.NaN }],
  ])('is refused by name: %s', (name, change) => {
    const call = () => budget({ photos: [{ ...photo, ...change }] })
    expect(call).toThrow(RangeError)
    expect(call).toThrow(name)
  })
})
