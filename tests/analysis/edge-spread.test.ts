import { describe, expect, it } from 'vitest'
import { pooledEdgeSpread } from '#app/analysis/edge-spread.ts'
import { expectNear } from '#tests/support/near.ts'

const read = (...millimetres: [left: number, right: number][]) =>
  millimetres.map(([left, right]) => ({ leftMetres: left / 1000, rightMetres: right / 1000 }))

describe('the spread of the edges over people', () => {
  it('is pooled over the readings: √(Σ(d − d̄)²/Σ(n − 1)) (JCGM 100:2008, 4.2.4)', () => {
    // Distances 80.0, 81.0 and 60.0, 60.4, 60.8 mm: squares 0.5 and 0.32 mm², 1 + 2 degrees of freedom.
    const spread = pooledEdgeSpread([
      read([20, 100], [20, 101]),
      read([30, 90], [30, 90.4], [30, 90.8]),
      read([10, 110]),
      [],
    ])
    expect(spread?.degreesOfFreedom).toBe(3)
    expectNear(spread?.standardDeviationMetres ?? 0, Math.sqrt(0.82 / 3) / 1000, { rel: 1e-9 })
  })

  it('is not known while each reading has been read by one person', () => {
    expect(pooledEdgeSpread([])).toBeNull()
    expect(pooledEdgeSpread([read([20, 100]), read([30, 90])])).toBeNull()
  })

  it('does not count what shifts both edges alike, and counts whole what moves them apart', () => {
    expectNear(pooledEdgeSpread([read([20, 100], [21, 101])])?.standardDeviationMetres ?? 1, 0, {
      abs: 1e-15,
    })
    // One person takes each edge 0.5 mm further out: the distances differ by 1 mm.
    const apart = pooledEdgeSpread([read([20, 100], [19.5, 100.5])])
    expectNear(apart?.standardDeviationMetres ?? 0, 0.001 / Math.SQRT2, { rel: 1e-9 })
  })

  it('refuses an edge that is not finite by name', () => {
    expect(() => pooledEdgeSpread([[], read([20, Number.NaN])])).toThrow('readings[1]')
  })
})
