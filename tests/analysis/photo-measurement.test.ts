import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { checkEllipse } from '#app/analysis/ellipse-check.ts'
import { measurePhoto, type PhotoPoint, type ScaleMark } from '#app/analysis/photo-measurement.ts'
import { photoScale } from '#app/analysis/photo-scale.ts'
import { fitCircle } from '#app/statistics/circle-fit.ts'
import { moments } from '#app/statistics/moments.ts'
import { expectNear } from '#tests/support/near.ts'
import { gaussian } from './random.ts'

const graduationMetres = 0.001

/** A picture of a circle and a scale below it, as a camera that is turned a little has them. */
function picture({
  diameterMetres = 0.078,
  pixelsPerMetre = 12_000,
  turn = 0.05,
  centre = { x: 900, y: 700 },
} = {}) {
  const turned = ({ x, y }: PhotoPoint): PhotoPoint => ({
    x: centre.x + x * Math.cos(turn) - y * Math.sin(turn),
    y: centre.y + x * Math.sin(turn) + y * Math.cos(turn),
  })
  return {
    scaleMarks: (centimetres: number[]): ScaleMark[] =>
      centimetres.map((cm) => ({
        ...turned({ x: (cm / 100 - 0.06) * pixelsPerMetre, y: 0.05 * pixelsPerMetre }),
        scaleMetres: cm / 100,
      })),
    points: (degrees: number[]): PhotoPoint[] =>
      degrees.map((angle) => {
        const radius = (diameterMetres / 2) * pixelsPerMetre
        const phi = (angle * Math.PI) / 180
        return turned({ x: radius * Math.cos(phi), y: radius * Math.sin(phi) })
      }),
  }
}

const around = [5, 40, 80, 130, 170, 220, 260, 310]

describe('the scale of a photo', () => {
  it('is the slope of the least squares line of places over numbers, by hand', () => {
    // 0, 1 and 2 cm at 0, 101 and 200 px: slope 100 px/cm, residuals −1/3, 2/3 and −1/3 px.
    const marks = [0, 101, 200].map((x, i) => ({ x, y: 50, scaleMetres: i / 100 }))
    const scale = photoScale(marks, graduationMetres)
    expectNear(scale.pixelsPerMetre, 10_000, { rel: 1e-12 })
    scale.residualsMetres.forEach((residual, i) => {
      expectNear(residual, ([1 / 3, 2 / 3, 1 / 3][i] as number) / 10_000, { rel: 1e-9 })
    })
    // s² = (6/9)/(2·3 − 4), and a line met to ±1 px; Σ(s − s̄)² = 2 cm².
    const scatter = Math.sqrt(6 / 9 / 2 / 2) * 100
    const pointing = (1 / Math.sqrt(3) / Math.SQRT2) * 100
    expectNear(scale.uPixelsPerMetre, Math.hypot(scatter, pointing), { rel: 1e-9 })
    expectNear(scale.degreesOfFreedom, (2 * (scatter ** 2 + pointing ** 2) ** 2) / scatter ** 4, {
      rel: 1e-9,
    })
  })

  it('has with two marks the uncertainty of meeting a line alone: a tenth of a division, or a pixel', () => {
    const { scaleMarks } = picture()
    const scale = photoScale(scaleMarks([0, 12]), graduationMetres)
    expectNear(scale.pixelsPerMetre, 12_000, { rel: 1e-12 })
    expect(scale.degreesOfFreedom).toBe(Number.POSITIVE_INFINITY)
    // Σ(s − s̄)² = 2·(6 cm)²; 0.1 mm is 1.2 px here.
    expectNear(scale.uPixelsPerMetre, 1.2 / Math.sqrt(3) / (0.06 * Math.SQRT2), { rel: 1e-12 })
    const small = photoScale(picture({ pixelsPerMetre: 4000 }).scaleMarks([0, 12]), graduationMetres)
    expectNear(small.uPointingPixels, 1 / Math.sqrt(3), { rel: 1e-12 })
  })

  it('tells by its residuals which mark has a wrong number', () => {
    const marks = picture().scaleMarks([0, 3, 6, 9, 12])
    const wrong = marks.map((mark, i) => (i === 3 ? { ...mark, scaleMetres: 0.08 } : mark))
    const { residualsMetres } = photoScale(wrong, graduationMetres)
    expect(residualsMetres.indexOf(Math.max(...residualsMetres))).toBe(3)
    expect(residualsMetres[3]).toBeGreaterThan(0.005)
  })
})

describe('the diameter off a photo', () => {
  it('is that of the circle which was drawn, wherever the camera stood', () => {
    fc.assert(
      fc.property(
        fc.double({ min: 0.02, max: 0.15, noNaN: true }),
        fc.double({ min: 2000, max: 40_000, noNaN: true }),
        fc.double({ min: -Math.PI, max: Math.PI, noNaN: true }),
        fc.record({ x: fc.integer({ min: 0, max: 4000 }), y: fc.integer({ min: 0, max: 4000 }) }),
        (diameterMetres, pixelsPerMetre, turn, centre) => {
          const drawn = picture({ diameterMetres, pixelsPerMetre, turn, centre })
          const measured = measurePhoto({
            scaleMarks: drawn.scaleMarks([0, 5, 12]),
            points: drawn.points(around),
            graduationMetres,
          })
          expectNear(measured.diameterMetres, diameterMetres, { rel: 1e-9 })
          expectNear(measured.circle.centreX, centre.x, { abs: 1e-6 })
          expectNear(measured.circle.centreY, centre.y, { abs: 1e-6 })
          expectNear(measured.arcDegrees, 310 - 5, { abs: 1e-6 })
          expect(measured.isShortArc).toBe(false)
        },
      ),
      { seed: 20, numRuns: 60 },
    )
  })

  it('is that of the published six points, with the scatter about the circle and the pixel of each point', () => {
    // W. Gander, G. H. Golub, R. Strebel, BIT 34 (1994) 558: radius 4.714226, σ 0.4523271. The standard uncertainty of
    // the radius, 1.224319 with s = 0.6396872, was worked out from these points by two independent programs.
    const points = [1, 2, 5, 7, 9, 3].map((x, i) => ({ x, y: [7, 6, 8, 7, 5, 7][i] as number }))
    const scaleMarks = [0, 10].map((x) => ({ x, y: 0, scaleMetres: x / 1000 }))
    const measured = measurePhoto({ scaleMarks, points, graduationMetres })
    expectNear(measured.diameterMetres, (2 * 4.714226) / 1000, { rel: 3e-7 })
    const sigma = Math.sqrt(measured.residualsMetres.reduce((sum, off) => sum + off ** 2, 0) / 6)
    expectNear(sigma, 0.4523271 / 1000, { rel: 1e-6 })
    const scatter = 1.2243191103639677
    const pixel = (scatter / 0.6396871834950935) * (1 / Math.sqrt(3))
    expectNear(measured.uCircleMetres, (2 * Math.hypot(scatter, pixel)) / 1000, { rel: 1e-6 })
    const nu = (3 * (scatter ** 2 + pixel ** 2) ** 2) / scatter ** 4
    expectNear(measured.circleDegreesOfFreedom, nu, { rel: 1e-5 })
  })

  it('has the variance of a product of two independent quantities: a² + b² + a²b², relative', () => {
    // The six points again: an uncertainty of a quarter of the radius makes the product count.
    const points = [1, 2, 5, 7, 9, 3].map((x, i) => ({ x, y: [7, 6, 8, 7, 5, 7][i] as number }))
    const scaleMarks = [0, 10].map((x) => ({ x, y: 0, scaleMetres: x / 1000 }))
    const { diameterMetres: d, ...measured } = measurePhoto({ scaleMarks, points, graduationMetres })
    const a = measured.uCircleMetres / d
    const b = measured.scale.uPixelsPerMetre / measured.scale.pixelsPerMetre
    expect(a * b).toBeGreaterThan(0.01)
    expectNear(measured.uDiameterMetres / d, Math.sqrt(a ** 2 + b ** 2 + (a * b) ** 2), { rel: 1e-12 })
    expectNear(measured.uScaleMetres / d, b * Math.sqrt(1 + a ** 2), { rel: 1e-12 })
  })

  it('covers what it was drawn with, when each mark is set a pixel beside its place', () => {
    const normal = gaussian(7)
    const drawn = picture()
    const beside = <T extends PhotoPoint>(mark: T): T => ({
      ...mark,
      x: mark.x + normal(),
      y: mark.y + normal(),
    })
    const scores = Array.from({ length: 400 }, () => {
      const measured = measurePhoto({
        scaleMarks: drawn.scaleMarks([0, 3, 6, 9, 12]).map(beside),
        points: drawn.points(around).map(beside),
        graduationMetres,
      })
      return (measured.diameterMetres - 0.078) / measured.uDiameterMetres
    })
    const { mean, standardDeviation } = moments(scores)
    expect(Math.abs(mean)).toBeLessThan(0.15)
    // The scatter holds the pixel, and the pixel stands beside it once more: stated a little too large, never too small.
    expect(standardDeviation).toBeGreaterThan(0.6)
    expect(standardDeviation).toBeLessThan(1.02)
  })

  it('has with three points the uncertainty of meeting them, which is known without limit', () => {
    const drawn = picture()
    const measured = measurePhoto({
      scaleMarks: drawn.scaleMarks([0, 12]),
      points: drawn.points([0, 120, 240]),
      graduationMetres,
    })
    expect(measured.circleDegreesOfFreedom).toBe(Number.POSITIVE_INFINITY)
    // Evenly spaced, the centre takes nothing from the radius: u(r) = u/√3 of a point met to ±0.1 mm.
    expectNear(measured.uCircleMetres, (2 * 0.0001) / Math.sqrt(3) / Math.sqrt(3), { rel: 1e-9 })
  })

  it('is less certain the less of the circle is marked, and says so below a half', () => {
    const drawn = picture()
    const of = (degrees: number[]) =>
      measurePhoto({ scaleMarks: drawn.scaleMarks([0, 12]), points: drawn.points(degrees), graduationMetres })
    const whole = of([0, 60, 120, 180, 240, 300])
    const quarter = of([0, 18, 36, 54, 72, 90])
    expect(whole.isShortArc).toBe(false)
    expect(quarter.isShortArc).toBe(true)
    expectNear(quarter.arcDegrees, 90, { abs: 1e-6 })
    expect(quarter.uCircleMetres / whole.uCircleMetres).toBeGreaterThan(4)
    expect(of([0, 60, 120, 179]).isShortArc).toBe(true)
    expect(of([0, 60, 120, 181]).isShortArc).toBe(false)
  })
})

describe('an ellipse', () => {
  const drawn = picture()
  /** A camera that looks from aside shortens what lies along its tilt: here to 0.98. */
  const aside = ({ x, y }: PhotoPoint) => ({ x: 900 + (x - 900) * 0.98, y })
  const many = Array.from({ length: 14 }, (_, i) => 25 * i)
  const of = (points: PhotoPoint[]) =>
    measurePhoto({ scaleMarks: drawn.scaleMarks([0, 12]), points, graduationMetres }).ellipseMetres

  it('is told from a circle by its points, with how much its diameters differ', () => {
    expectNear(of(drawn.points(many).map(aside)) ?? 0, 0.02 * 0.078, { rel: 0.02 })
    expectNear(of(drawn.points([0, 70, 130, 150, 200, 265, 300]).map(aside)) ?? 0, 0.02 * 0.078, {
      rel: 0.05,
    })
  })

  it('is not seen in a circle whose points lie a pixel beside it, but once in some hundred', () => {
    const normal = gaussian(11)
    const beside = ({ x, y }: PhotoPoint) => ({ x: x + normal(), y: y + normal() })
    const seen = Array.from({ length: 300 }, () =>
      checkEllipse(...offsOf(drawn.points(many).map(beside))),
    ).filter((check) => (check?.p ?? 1) < 0.01)
    // Binomial, 300 trials of 0.01: more than 9 come up once in a thousand.
    expect(seen.length).toBeLessThanOrEqual(9)
    expect(of(drawn.points(many).map(beside))).toBeNull()
  })

  it('that is rounder than half a percent moves the diameter too little to be named', () => {
    expect(of(drawn.points(many).map(({ x, y }) => ({ x: 900 + (x - 900) * 0.997, y })))).toBeNull()
  })

  it('is not looked for in fewer than seven points, nor found where there is no scatter at all', () => {
    expect(of(drawn.points([0, 60, 120, 180, 240, 300]).map(aside))).toBeNull()
    expect(checkEllipse(Array(8).fill(0), [0, 1, 2, 3, 4, 5, 6, 6.1])).toEqual({ axesDifference: 0, p: 1 })
    expect(() => checkEllipse([1, 2], [1])).toThrow('angles')
    expect(() => checkEllipse([Number.NaN], [1])).toThrow('residuals[0]')
  })

  function offsOf(points: PhotoPoint[]): [residuals: number[], angles: number[]] {
    const { centreX, centreY, residuals } = fitCircle(points)
    return [residuals, points.map(({ x, y }) => Math.atan2(y - centreY, x - centreX))]
  }
})

describe('marks that give no diameter', () => {
  const drawn = picture()
  const good = { scaleMarks: drawn.scaleMarks([0, 12]), points: drawn.points(around), graduationMetres }
  const line = [0, 1, 2, 3].map((i) => ({ x: 100 + 30 * i, y: 200 + 10 * i }))
  it.each<[string, Partial<typeof good>]>([
    ['scaleMarks', { scaleMarks: drawn.scaleMarks([4]) }],
    ['scaleMarks', { scaleMarks: drawn.scaleMarks([4, 4]) }],
    ['scaleMarks', { scaleMarks: [0, 0.1].map((scaleMetres) => ({ x: 5, y: 5, scaleMetres })) }],
    [
      'scaleMarks[1].y',
      { scaleMarks: drawn.scaleMarks([0, 12]).map((mark, i) => ({ ...mark, y: i ? Number.NaN : 0 })) },
    ],
    ['points', { points: drawn.points([0, 90]) }],
    ['points', { points: line }],
    ['points', { points: [line[0], line[0], line[0]] as PhotoPoint[] }],
    ['points', { points: drawn.points([0, 5, 10, 15]) }],
    ['points[0].x', { points: [{ x: Number.POSITIVE_INFINITY, y: 1 }, ...drawn.points(around)] }],
    ['graduationMetres', { graduationMetres: 0 }],
  ])('are refused by name: %s', (name, change) => {
    const call = () => measurePhoto({ ...good, ...change })
    expect(call).toThrow(RangeError)
    expect(call).toThrow(name)
  })
})
