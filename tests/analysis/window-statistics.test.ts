import { describe, expect, it } from 'vitest'
import { windowStatistics } from '#app/analysis/settled-window.ts'
import { moments } from '#app/statistics/moments.ts'
import { expectNear } from '#tests/support/near.ts'
import { gaussian } from './random.ts'

/** Stationary first-order autoregressive series with unit variance. */
function autoregressive(noise: () => number, phi: number, count: number): number[] {
  let value = noise()
  return Array.from({ length: count }, () => {
    value = phi * value + Math.sqrt(1 - phi * phi) * noise()
    return value
  })
}

/** How often mean ± 2 standard errors holds the true mean 0, and the ratio of claimed to true variance. */
function trial(phi: number, count: number, runs: number) {
  const noise = gaussian(11)
  let claimed = 0
  let actual = 0
  let plain = 0
  for (let run = 0; run < runs; run++) {
    const values = autoregressive(noise, phi, count)
    const { mean, standardError } = windowStatistics(values)
    claimed += standardError ** 2
    actual += mean ** 2
    plain += moments(values).standardDeviation ** 2 / count
  }
  return { claimed: claimed / actual, plain: plain / actual }
}

describe('the statistics of a window', () => {
  it('are mean and standard deviation, with s/√n for independent values', () => {
    const noise = gaussian(7)
    const values = Array.from({ length: 2000 }, () => 200 + noise())
    const window = windowStatistics(values)
    const { mean, standardDeviation, count } = moments(values)
    expect(window).toMatchObject({ mean, standardDeviation, count })
    expect(window.effectiveCount).toBeGreaterThan(1600)
    expectNear(window.standardError, standardDeviation / Math.sqrt(2000), { rel: 0.12 })
  })

  it.each([0.5, 0.8, 0.9])('count the memory of an autoregressive series, φ = %s (closed form)', (phi) => {
    // n_eff → n (1 − φ)/(1 + φ) for long series.
    const values = autoregressive(gaussian(8), phi, 40_000)
    expectNear(windowStatistics(values).effectiveCount, (40_000 * (1 - phi)) / (1 + phi), { rel: 0.12 })
  })

  it.each([
    [0, 50],
    [0.5, 50],
    [0.8, 250],
  ])('claim about the true variance of the mean at φ = %s, n = %s, where s²/n falls short', (phi, count) => {
    const { claimed, plain } = trial(phi, count, 3000)
    expect(claimed).toBeGreaterThan(0.8)
    expect(claimed).toBeLessThan(1.4)
    if (phi > 0) expect(plain).toBeLessThan(0.4)
  })

  it('never count more samples than there are, nor fewer than two', () => {
    const alternating = Array.from({ length: 100 }, (_, i) => (i % 2 === 0 ? 1 : -1) + i * 1e-6)
    expect(windowStatistics(alternating).effectiveCount).toBe(100)
    const ramp = Array.from({ length: 100 }, (_, i) => i)
    const { effectiveCount, standardError, standardDeviation } = windowStatistics(ramp)
    expect(effectiveCount).toBeGreaterThanOrEqual(2)
    expect(effectiveCount).toBeLessThan(10)
    expect(standardError).toBeGreaterThan(standardDeviation / 4)
  })

  it('have no standard error of their own where the last digit does not move', () => {
    expect(windowStatistics(Float64Array.of(200.1, 200.1, 200.1))).toEqual({
      count: 3,
      mean: 200.1,
      standardDeviation: 0,
      standardError: 0,
      effectiveCount: 3,
    })
  })

  it('refuse fewer than two values and values that are not finite, by name', () => {
    expect(() => windowStatistics([1])).toThrow(RangeError)
    expect(() => windowStatistics([1])).toThrow('values')
    expect(() => windowStatistics([1, Number.NaN])).toThrow('values[1]')
  })
})
