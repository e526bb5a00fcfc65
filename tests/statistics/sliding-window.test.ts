import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { moments } from '#app/statistics/moments.ts'
import { SlidingWindow } from '#app/statistics/sliding-window.ts'
import { expectNear } from '#tests/support/near.ts'

/** The line and the residuals' lag-1 autocorrelation, formed directly. */
function directTrend(times: number[], values: number[]) {
  const mean = (list: number[]) => list.reduce((a, b) => a + b, 0) / list.length
  const [t0, v0] = [mean(times), mean(values)]
  const timeSquares = times.reduce((sum, t) => sum + (t - t0) ** 2, 0)
  const slope = times.reduce((sum, t, i) => sum + (t - t0) * ((values[i] as number) - v0), 0) / timeSquares
  const residuals = values.map((value, i) => value - v0 - slope * ((times[i] as number) - t0))
  const residualSquares = residuals.reduce((sum, r) => sum + r * r, 0)
  const products = residuals.reduce((sum, r, i) => sum + r * (residuals[i + 1] ?? 0), 0)
  return { slope, residualSquares, timeSquares, residualLag1: products / residualSquares }
}

describe('a sliding window', () => {
  it('agrees with direct sums over its samples, however many have gone through it', () => {
    const samples = fc.array(
      fc.record({
        step: fc.double({ min: 0.01, max: 0.6, noNaN: true }),
        noise: fc.double({ min: -1, max: 1, noNaN: true }),
      }),
      { minLength: 20, maxLength: 400 },
    )
    fc.assert(
      fc.property(samples, fc.constantFrom(0, 300, -1e4), (list, level) => {
        const window = new SlidingWindow(2)
        let time = 1e6
        const kept: { time: number; value: number }[] = []
        list.forEach(({ step, noise }, i) => {
          time += step
          const value = level + 0.3 * i + noise
          kept.push({ time, value })
          window.add(time, value)
        })
        const inside = kept.filter((sample) => sample.time >= time - 2)
        const values = inside.map((sample) => sample.value)
        expect([...window.values()]).toEqual(values)
        expect(window.count).toBe(inside.length)
        expect(window.lastSeconds).toBe(time)
        const direct = moments(values)
        expectNear(window.mean, direct.mean, { rel: 1e-13, abs: 1e-12 })
        expectNear(window.standardDeviation, direct.standardDeviation, { rel: 1e-8, abs: 1e-7 })
        if (inside.length < 5 || direct.standardDeviation < 0.1) return
        const line = directTrend(
          inside.map((sample) => sample.time),
          values,
        )
        const { slope, timeSquares, residualSquares, residualLag1 } = window.trend
        expectNear(slope, line.slope, { rel: 1e-7, abs: 1e-6 })
        expectNear(timeSquares, line.timeSquares, { rel: 1e-8 })
        expectNear(residualSquares, line.residualSquares, { rel: 1e-6, abs: 1e-6 })
        if (line.residualSquares > 0.1) expectNear(residualLag1, line.residualLag1, { abs: 1e-5 })
      }),
      { numRuns: 60 },
    )
  })

  it('keeps its digits over a million samples with a small spread on a large value', () => {
    // The NumAcc4 pattern of the NIST reference data sets, 10 Hz.
    const window = new SlidingWindow(100)
    for (let i = 0; i < 1_000_000; i++) window.add(i / 10, i % 2 === 0 ? 10000000.1 : 10000000.3)
    const { count, mean, lag1, standardDeviation } = moments(window.values())
    expect(count).toBe(1001)
    expectNear(window.mean, mean, { rel: 1e-15 })
    expectNear(window.standardDeviation, standardDeviation, { rel: 1e-10 })
    expectNear(window.trend.residualLag1, lag1, { abs: 1e-4 })
  })

  it('sees no spread and no slope in equal values', () => {
    const window = new SlidingWindow(5)
    for (let i = 0; i < 200; i++) window.add(i / 10, i < 20 ? 3.7 : 250.1)
    expect(window.standardDeviation).toBe(0)
    expect(window.trend).toMatchObject({ slope: 0, residualSquares: 0, residualLag1: 0 })
  })

  it('gives the slope of a straight line, and none where all samples have one time', () => {
    const window = new SlidingWindow(5)
    for (let i = 0; i <= 100; i++) window.add(i / 10, 12 - 0.25 * (i / 10))
    expectNear(window.trend.slope, -0.25, { rel: 1e-12 })
    expect(window.trend.residualLag1).toBe(0)
    const still = new SlidingWindow(5)
    still.add(1, 2)
    still.add(1, 3)
    expect(still.trend.slope).toBe(0)
  })

  it('costs the same a sample for a long window as for a short one', () => {
    const cost = (windowSeconds: number): number => {
      const window = new SlidingWindow(windowSeconds)
      for (let i = 0; i < 50_000; i++) window.add(i, Math.sin(i))
      const started = performance.now()
      for (let i = 50_000; i < 250_000; i++) window.add(i, Math.sin(i))
      return performance.now() - started
    }
    cost(10)
    // A cost in proportion to the window would make this ratio about 1000.
    expect(cost(20_000) / cost(20)).toBeLessThan(20)
  })

  it('starts anew after a reset', () => {
    const window = new SlidingWindow(5)
    window.add(10, 1)
    window.reset()
    expect(window.count).toBe(0)
    expect(window.lastSeconds).toBeNull()
    window.add(2, 7)
    expect(window.mean).toBe(7)
  })

  it('refuses by name', () => {
    expect(() => new SlidingWindow(0)).toThrow('windowSeconds')
    const window = new SlidingWindow(5)
    expect(() => window.mean).toThrow('count')
    window.add(1, 1)
    expect(() => window.standardDeviation).toThrow('count')
    expect(() => window.trend).toThrow(RangeError)
    expect(() => window.add(0.9, 1)).toThrow('timeSeconds')
    expect(() => window.add(Number.NaN, 1)).toThrow('timeSeconds')
    expect(() => window.add(2, Number.NaN)).toThrow('value')
    expect(window.count).toBe(1)
  })
})
