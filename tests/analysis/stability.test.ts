import { describe, expect, it } from 'vitest'
import { judgeStability, newestStretch } from '#app/analysis/stability.ts'
import { expectNear } from '#tests/support/near.ts'
import { gaussian } from './random.ts'

const record = (count: number, value: (i: number) => number) => ({
  values: Array.from({ length: count }, (_, i) => value(i)),
  intervalSeconds: 0.1,
})

describe('The stability of a channel', () => {
  it('of white noise gets better with averaging, and shows no trend', () => {
    const noise = gaussian(8)
    const { best, driftFromSeconds, trend } = judgeStability(record(4000, () => 200 + 0.1 * noise()))
    expect(best.seconds).toBeGreaterThan(10)
    expect(driftFromSeconds).toBeNull()
    expect(trend.p).toBeGreaterThan(0.05)
  })

  it('with a drift is best averaged as long as theory says, and the drift is told with its rate', () => {
    const noise = gaussian(9)
    const perSample = 0.0005
    const { best, driftFromSeconds, slopePerMinute, trend } = judgeStability(
      record(4000, (i) => 200 + 0.1 * noise() + perSample * i),
    )
    // White noise falls as σ/√m and a drift rises as D·m/√2: least where m³ = σ²/D² (NIST SP 1065, section 3).
    const ideal = (0.1 / perSample) ** (2 / 3)
    expect(best.m).toBeGreaterThan(ideal / 3)
    expect(best.m).toBeLessThan(ideal * 3)
    expect(driftFromSeconds).toBeGreaterThan(best.seconds)
    expectNear(slopePerMinute, perSample * 600, { rel: 0.03 })
    expect(trend.p).toBeLessThan(1e-6)
  })

  it('is told from the newest stretch without a gap', () => {
    const seconds = Array.from({ length: 50 }, (_, i) => i / 10)
    const values = seconds.map((_, i): number | null => (i === 20 ? null : i))
    expect(newestStretch({ seconds, values }).values).toEqual(values.slice(21))
    const late = seconds.map((at, i) => (i < 30 ? at : at + 5))
    expect(newestStretch({ seconds: late, values: seconds.map((_, i) => i) }).values[0]).toBe(30)
    expectNear(newestStretch({ seconds, values }).intervalSeconds, 0.1, { rel: 1e-9 })
    expect(newestStretch({ seconds: [], values: [] })).toEqual({
      values: [],
      intervalSeconds: 0,
      endSeconds: null,
    })
    const gone = values.map((value, i) => (i < 45 ? value : null))
    expect(newestStretch({ seconds, values: gone })).toMatchObject({
      values: values.slice(21, 45),
      endSeconds: seconds[44],
    })
  })

  it('is refused for too short a record', () => {
    expect(() => judgeStability(record(50, (i) => i))).toThrow(/^values must be at least 100/)
  })
})
