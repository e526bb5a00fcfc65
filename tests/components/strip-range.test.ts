import { describe, expect, it } from 'vitest'
import { heldRange, stripRange } from '#app/charts/strip-range.ts'

/** A minute at one sample a second: 0 V, and from ten seconds before now 200 V with the scatter given. */
function stepped(scatter: number[]) {
  const seconds = Array.from({ length: 60 }, (_, i) => i - 59)
  return { seconds, values: seconds.map((t, i) => (t < -10 ? 0 : 200 + (scatter[i % scatter.length] ?? 0))) }
}

describe('the range of a strip', () => {
  it('holds all that is visible while the setpoint moves', () => {
    const [low, high] = stripRange({ trace: stepped([0]), steadySeconds: null, tolerance: 0.4 })
    expect(low).toBeLessThan(0)
    expect(high).toBeGreaterThan(200)
    expect(high - low).toBeLessThan(240)
  })

  it('is mean ± 6 standard deviations of the window once it stands', () => {
    const [low, high] = stripRange({ trace: stepped([0.3, -0.3]), steadySeconds: 5, tolerance: 0.4 })
    // Six values ± 0.3 about their mean: s = 0.3·√(6/5).
    expect((low + high) / 2).toBeCloseTo(200, 6)
    expect((high - low) / 2).toBeCloseTo(6 * 0.3 * Math.sqrt(6 / 5), 6)
  })

  it('is never narrower than the tolerance on either side', () => {
    const [low, high] = stripRange({ trace: stepped([0]), steadySeconds: 5, tolerance: 0.4 })
    expect(low).toBeCloseTo(199.6, 9)
    expect(high).toBeCloseTo(200.4, 9)
  })

  it('passes over gaps, and has a range when nothing was read', () => {
    const trace = { seconds: [-2, -1, 0], values: [null, 5, null] }
    expect(stripRange({ trace, steadySeconds: 5, tolerance: 1 })).toEqual([4, 6])
    const empty = stripRange({ trace: { seconds: [], values: [] }, steadySeconds: null, tolerance: 1 })
    expect(empty[1]).toBeGreaterThan(empty[0])
  })

  it('stays while the values wander within it, and follows when they leave or shrink', () => {
    const held = [199, 201] as const
    expect(heldRange(null, held)).toBe(held)
    expect(heldRange(held, [199.2, 201.2])).toBe(held)
    expect(heldRange(held, [199.5, 201.5])).toEqual([199.5, 201.5])
    expect(heldRange(held, [198, 202])).toEqual([198, 202])
    expect(heldRange(held, [199.9, 200.1])).toEqual([199.9, 200.1])
  })
})
