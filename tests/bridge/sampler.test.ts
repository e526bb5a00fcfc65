import { describe, expect, it } from 'vitest'
import { type ChannelValues, channels } from '#app/safety/types.ts'
import { CoilThermometer } from '#bridge/coil-thermometer.ts'
import { nextCommanded } from '#bridge/ramp.ts'
import { Recorder, type UnnumberedSummary } from '#bridge/recorder.ts'
import { history, ringSeconds, SampleRing } from '#bridge/sampler.ts'

const all = (value: number | null): ChannelValues =>
  Object.fromEntries(channels.map((channel) => [channel, value])) as ChannelValues

describe('The ring of samples', () => {
  it('keeps ten minutes, numbers on, and gives null where nothing was read', () => {
    const ring = new SampleRing(10)
    for (let i = 0; i < 7000; i++) ring.push(i / 10, all(i === 6990 ? null : i))
    expect(ring.oldest).toBe(7000 - ringSeconds * 10)
    const { first, times, values } = ring.message('bench-1', 6989, 6992)
    expect(first).toBe(6989)
    expect(times).toEqual([698.9, 699, 699.1])
    expect(values.anodeVolts).toEqual([6989, null, 6991])
    expect(ring.firstSince(699)).toBe(6990)
  })

  it('gives the last minute whole and older ones thinned, without hiding a gap', () => {
    const ring = new SampleRing(10)
    for (let i = 0; i < 3000; i++) ring.push(i / 10, all(i === 1005 ? null : i))
    const [older, recent] = history(ring, 'bench-1', 299.9, 10)
    expect(recent?.times).toHaveLength(601)
    expect(older?.times.length).toBe(239)
    expect((older?.first ?? 0) + (older?.times.length ?? 0)).toBe(recent?.first)
    expect(older?.values.anodeVolts?.filter((value) => value === null)).toHaveLength(1)
  })
})

describe('The recorder', () => {
  it('sums each whole second of each channel, and leaves out what was not read', () => {
    const seconds: UnnumberedSummary[][] = []
    const recorder = new Recorder('bench-1', (summaries) => seconds.push(summaries))
    for (const [at, value] of [
      [10.1, 1],
      [10.5, 3],
      [10.9, null],
      [11.2, 8],
    ] as const) {
      recorder.add(at, { ...all(null), anodeVolts: value })
    }
    expect(seconds).toEqual([
      [{ benchId: 'bench-1', second: 10, channel: 'anodeVolts', min: 1, mean: 2, max: 3, count: 2 }],
    ])
    recorder.flush()
    expect(seconds[1]?.[0]).toMatchObject({ second: 11, count: 1, mean: 8 })
  })
})

describe('The coil thermometer', () => {
  const config = {
    coilResistance: { ohms: 4.3, celsius: 21 },
    coilThermal: { kelvinPerWatt: 1.8, timeConstantSeconds: 900, ambientCelsius: 21 },
  }

  it('reads copper: 10 % more resistance than at 21 °C is 25.5 K more', () => {
    // T = (R/R₁)(k + T₁) − k with k = 1/0.00393 − 20 = 234.45: 0.1 × 255.45 K (IEC 60028).
    const thermometer = new CoilThermometer(config)
    expect(thermometer.read(0, 4.3 * 1.1, 1)).toBeCloseTo(21 + 25.545, 2)
    expect(thermometer.isMeasured).toBe(true)
  })

  it('below 0.1 A is carried on by the cooling model, and without a reading is unknown', () => {
    const thermometer = new CoilThermometer(config)
    const hot = thermometer.read(0, 4.3 * 1.1 * 2, 2) ?? 0
    let cooled = hot
    for (let at = 1; at <= 900; at++) cooled = thermometer.read(at, 0, 0) ?? 0
    // After one time constant 1/e of the excess is left.
    expect(cooled - 21).toBeCloseTo((hot - 21) / Math.E, 2)
    expect(thermometer.isMeasured).toBe(false)
    expect(thermometer.read(901, null, null)).toBeNull()
  })

  it('follows a jump of the temperature to within a tenth in a second', () => {
    const thermometer = new CoilThermometer(config)
    thermometer.read(0, 4.3, 1)
    let celsius = 0
    for (let at = 0.1; at < 1.05; at += 0.1) celsius = thermometer.read(at, 4.3 * 1.2, 1) ?? 0
    expect((celsius - 21) / 51.09).toBeGreaterThan(0.9)
  })
})

describe('A step of a ramp', () => {
  it('is at most the rate times the time, up and down, and ends on the target', () => {
    expect(nextCommanded(0, 200, 80, 0.1)).toBe(8)
    expect(nextCommanded(200, 0, 80, 0.1)).toBe(192)
    expect(nextCommanded(196, 200, 80, 0.1)).toBe(200)
    expect(nextCommanded(200, 200, 80, 0.1)).toBe(200)
  })
})
