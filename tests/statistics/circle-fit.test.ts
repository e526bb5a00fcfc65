import { describe, expect, it } from 'vitest'
import { fitCircle } from '#app/statistics/circle-fit.ts'
import { expectNear } from '#tests/support/near.ts'
import circles from './data/circles.json'

const pointsOf = ({ x, y }: { x: number[]; y: number[] }) =>
  x.map((value, i) => ({ x: value, y: y[i] as number }))

describe('A circle through points', () => {
  // W. Gander, G. H. Golub, R. Strebel, BIT 34 (1994) 558, six points; the others are seeded points of this project, fitted by
  // scipy's least squares and by Nelder and Mead.
  it.each(['GGS6', 'arc40deg_px', 'arc90deg_px', 'full_px', 'half_mm'] as const)(
    'is the geometric fit of %s',
    (name) => {
      const { data, expected } = circles[name]
      const { geometric } = expected
      const fit = fitCircle(pointsOf(data))
      expectNear(fit.centreX, geometric.xc, { rel: 1e-7 })
      expectNear(fit.centreY, geometric.yc, { rel: 1e-7 })
      expectNear(fit.radius, geometric.r, { rel: 1e-7 })
      expectNear(fit.rms, geometric.rms, { rel: 1e-7 })
      expectNear(fit.centreXError ?? 0, geometric.u_xc, { rel: 1e-6 })
      expectNear(fit.centreYError ?? 0, geometric.u_yc, { rel: 1e-6 })
      expectNear(fit.radiusError ?? 0, geometric.u_r, { rel: 1e-6 })
    },
  )

  // N. Chernov, Circular and Linear Regression (2010), section 5.13.
  it('is on the right side of the modified W, where the algebraic start is on the wrong one', () => {
    const { data, expected } = circles.chernov_W
    const fit = fitCircle(pointsOf(data))
    const [centreX = 0, centreY = 0, radius = 0] = expected.printed.best
    expectNear(fit.centreX, centreX, { abs: 1e-3 })
    expectNear(fit.centreY, centreY, { rel: 1e-3 })
    expectNear(fit.radius, radius, { rel: 1e-3 })
  })

  it('through three points is exact and has no errors', () => {
    const fit = fitCircle(pointsOf(circles.exact_three_points.data))
    expectNear(fit.radius, 3, { abs: 1e-12 })
    expectNear(fit.centreX, 0, { abs: 1e-12 })
    expect([fit.centreXError, fit.centreYError, fit.radiusError]).toEqual([null, null, null])
  })

  it('warns on a short arc and on no other', () => {
    expect(fitCircle(pointsOf(circles.arc40deg_px.data)).warning).toMatch(/span 40°/)
    expect(fitCircle(pointsOf(circles.full_px.data)).warning).toBeNull()
  })

  it('is refused for points on a line, fewer than three, and what is no number', () => {
    expect(() => fitCircle(pointsOf(circles.collinear.data))).toThrow(/^points must not lie on one line/)
    expect(() =>
      fitCircle([
        { x: 0, y: 0 },
        { x: 1, y: 0 },
      ]),
    ).toThrow(/^points must be at least three/)
    expect(() =>
      fitCircle([
        { x: 0, y: 0 },
        { x: 1, y: 0 },
        { x: Number.NaN, y: 1 },
      ]),
    ).toThrow(/^points\[2\]\.x/)
  })

  it('moves and grows with its points', () => {
    const points = pointsOf(circles.half_mm.data)
    const fit = fitCircle(points)
    const moved = fitCircle(points.map(({ x, y }) => ({ x: 1000 + 3 * y, y: -500 - 3 * x })))
    expectNear(moved.radius, 3 * fit.radius, { rel: 1e-9 })
    expectNear(moved.centreX, 1000 + 3 * fit.centreY, { rel: 1e-9 })
    expectNear(moved.radiusError ?? 0, 3 * (fit.radiusError ?? 0), { rel: 1e-6 })
  })
})
