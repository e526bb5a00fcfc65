import { describe, expect, it } from 'vitest'
import type { ChannelState, ChannelTolerance } from '#app/analysis/settled-window.ts'
import { ChannelWatch, classifyWindow } from '#app/analysis/settled-window.ts'
import { moments } from '#app/statistics/moments.ts'
import { expectNear } from '#tests/support/near.ts'
import { gaussian } from './random.ts'

const tolerance: ChannelTolerance = { holdSeconds: 2, toleranceDeviation: 0.05, toleranceDrift: 0.05 }

/** Ten samples a second from 0 s on. */
function record(seconds: number, valueAt: (timeSeconds: number) => number | null) {
  return Array.from({ length: Math.round(seconds * 10) + 1 }, (_, i) => ({
    timeSeconds: i / 10,
    value: valueAt(i / 10),
  }))
}

const stateOf = (seconds: number, valueAt: (timeSeconds: number) => number | null): ChannelState =>
  classifyWindow(record(seconds, valueAt), tolerance).state

describe('a live channel is', () => {
  it('stale before its first sample and once none has come for the timeout', () => {
    const watch = new ChannelWatch(tolerance)
    expect(watch.status(3)).toMatchObject({ state: 'stale', reason: 'no sample yet', mean: null, count: 0 })
    watch.add(3, 200)
    expect(watch.status(4)).toMatchObject({ state: 'settling', mean: 200, standardDeviation: null })
    expect(watch.status(4.01)).toMatchObject({ state: 'stale', reason: 'no sample for 1 s' })
  })

  it('stale when only missing values arrive', () => {
    expect(stateOf(10, (t) => (t < 8 ? 200 : null))).toBe('stale')
    expect(stateOf(10, (t) => (t < 9.5 ? 200 : null))).toBe('settled')
  })

  it('settling until the window is full and has held its tolerance', () => {
    const noise = gaussian(1)
    const samples = record(8, () => 200 + 0.01 * noise())
    const watch = new ChannelWatch(tolerance)
    const states = samples.map(({ timeSeconds, value }) => {
      watch.add(timeSeconds, value)
      return watch.status(timeSeconds).state
    })
    expect(states.indexOf('settled')).toBe(70)
    expect(new Set(states.slice(0, 70))).toEqual(new Set(['settling']))
    expect(new Set(states.slice(70))).toEqual(new Set(['settled']))
  })

  it('settled with the mean, spread and drift of its window', () => {
    const noise = gaussian(2)
    const samples = record(20, () => 200 + 0.01 * noise())
    const { mean, standardDeviation, driftPerSecond, count, reason } = classifyWindow(samples, tolerance)
    const inside = moments(samples.slice(-51).map(({ value }) => value as number))
    expect(count).toBe(51)
    expectNear(mean ?? Number.NaN, inside.mean, { rel: 1e-13 })
    expectNear(standardDeviation ?? Number.NaN, inside.standardDeviation, { rel: 1e-8 })
    expect(Math.abs(driftPerSecond ?? Number.NaN)).toBeLessThan(0.005)
    expect(reason).toMatch(/^± 0\.0\d+ over 5 s$/)
  })

  it('settled when its last digit does not move', () => {
    expect(stateOf(10, () => 200)).toBe('settled')
    expect(
      classifyWindow(
        record(10, () => 200),
        tolerance,
      ).standardDeviation,
    ).toBe(0)
  })

  it('drifting on a ramp, up or down, through noise and through steps of the last digit', () => {
    const noise = gaussian(3)
    for (const slope of [0.04, -0.04]) {
      const ramp = classifyWindow(
        record(10, (t) => 200 + slope * t + 0.02 * noise()),
        tolerance,
      )
      expect(ramp.state).toBe('drifting')
      expect(ramp.reason).toMatch(slope > 0 ? /^rises \d\.\d+ per minute$/ : /^falls/)
      expectNear(ramp.driftPerSecond ?? Number.NaN, slope, { abs: 0.02 })
    }
    expect(stateOf(10, (t) => Math.round((200 + 0.1 * t) * 10) / 10)).toBe('drifting')
  })

  it('drifting, not noisy, while it bends towards its end value', () => {
    expect(stateOf(6, (t) => 200 - 20 * Math.exp(-t / 2))).toBe('drifting')
    expect(stateOf(8, (t) => 200 - 20 * Math.exp(-t / 4))).toBe('drifting')
    expect(stateOf(40, (t) => 200 - 20 * Math.exp(-t / 2))).toBe('settled')
  })

  it('noisy with a spread out of tolerance and no trend', () => {
    const noise = gaussian(4)
    const noisy = classifyWindow(
      record(10, () => 200 + 0.3 * noise()),
      tolerance,
    )
    expect(noisy.state).toBe('noisy')
    expect(noisy.reason).toMatch(/^standard deviation 0\.\d+, 0\.05 allowed$/)
  })

  it('noisy, not drifting, when it wanders slowly to and fro', () => {
    // Half a period of hum with a period longer than a sample, no trend over the window.
    expect(stateOf(10, (t) => 200 + 0.3 * Math.cos(2 * Math.PI * (t - 7.5)))).toBe('noisy')
  })

  it('rarely called drifting by chance when its noise has a memory', () => {
    // First-order autoregressive noise, φ = 0.8: a plain t test would count more than half as drifts.
    const noise = gaussian(5)
    let drifting = 0
    const runs = 400
    for (let run = 0; run < runs; run++) {
      let value = 0
      const samples = record(5, () => {
        value = 0.8 * value + 0.2 * noise()
        return 200 + value
      })
      if (classifyWindow(samples, { ...tolerance, toleranceDeviation: 10 }).state === 'drifting') drifting++
    }
    expect(drifting / runs).toBeLessThan(0.15)
  })

  it('settling when a change out of tolerance may be chance', () => {
    const status = classifyWindow(
      record(5, (t) => 200 + (Math.round(t * 10) % 2) * 0.4 + 0.02 * t),
      { ...tolerance, toleranceDeviation: 1 },
    )
    expect(status.state).toBe('settling')
    expect(status.reason).toBe('0.1 of change may be chance')
  })
})

describe('a watch', () => {
  it('starts its window anew after a gap, so that none reaches across', () => {
    const watch = new ChannelWatch(tolerance)
    for (const { timeSeconds, value } of record(10, () => 200)) watch.add(timeSeconds, value)
    expect(watch.status(10).state).toBe('settled')
    watch.add(11.2, 200)
    expect(watch.status(11.2)).toMatchObject({ state: 'settling', count: 1 })
  })

  it('leaves settled as soon as its window is out of tolerance, and holds anew', () => {
    const watch = new ChannelWatch(tolerance)
    const seen: ChannelState[] = []
    for (const { timeSeconds, value } of record(30, (t) => (t < 10 ? 200 : 201))) {
      watch.add(timeSeconds, value)
      seen.push(watch.status(timeSeconds).state)
    }
    expect(seen[99]).toBe('settled')
    expect(seen[101]).not.toBe('settled')
    // The step has left the window after 5 s, and 2 s have to be held.
    expect(seen.indexOf('settled', 101)).toBeGreaterThanOrEqual(170)
    expect(seen.indexOf('settled', 101)).toBeLessThanOrEqual(172)
  })

  it('forgets everything on reset and gives its values out', () => {
    const watch = new ChannelWatch({ ...tolerance, windowSeconds: 1 })
    for (const { timeSeconds, value } of record(3, (t) => t)) watch.add(timeSeconds, value)
    expect(watch.values()[0]).toBe(2)
    expect(watch.values().at(-1)).toBe(3)
    watch.reset()
    expect(watch.status(3)).toMatchObject({ state: 'stale', count: 0 })
    watch.add(0.5, 1)
    expect(watch.status(0.5).count).toBe(1)
  })

  it('agrees with the same samples in typed arrays, NaN being the missing value', () => {
    const noise = gaussian(6)
    const samples = record(12, (t) => (Math.round(t * 10) % 7 === 0 ? null : 200 + 0.01 * noise()))
    const arrays = {
      timesSeconds: Float64Array.from(samples, ({ timeSeconds }) => timeSeconds),
      values: Float64Array.from(samples, ({ value }) => value ?? Number.NaN),
    }
    expect(classifyWindow(arrays, tolerance)).toEqual(classifyWindow(samples, tolerance))
    expect(classifyWindow(arrays, tolerance, 14).state).toBe('stale')
  })

  it('refuses by name', () => {
    const watch = new ChannelWatch(tolerance)
    watch.add(5, 1)
    for (const [name, call] of [
      ['windowSeconds', () => new ChannelWatch({ ...tolerance, windowSeconds: 0 })],
      ['holdSeconds', () => new ChannelWatch({ ...tolerance, holdSeconds: -1 })],
      ['sampleTimeoutSeconds', () => new ChannelWatch({ ...tolerance, sampleTimeoutSeconds: Number.NaN })],
      ['toleranceDeviation', () => new ChannelWatch({ ...tolerance, toleranceDeviation: -1 })],
      ['toleranceDrift', () => new ChannelWatch({ ...tolerance, toleranceDrift: Number.NaN })],
      ['timeSeconds', () => watch.add(4, 1)],
      ['timeSeconds', () => watch.add(Number.NaN, null)],
      ['value', () => watch.add(6, Number.NaN)],
      ['nowSeconds', () => watch.status(Number.NaN)],
      ['samples', () => classifyWindow([], tolerance)],
      ['values', () => classifyWindow({ timesSeconds: [1, 2], values: [1] }, tolerance)],
    ] as const) {
      expect(call).toThrow(RangeError)
      expect(call).toThrow(name)
    }
  })
})
