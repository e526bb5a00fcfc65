import { describe, expect, it } from 'vitest'
import { type BudgetBench, type GivenDiameter, type Reading, readingBudget } from '#app/analysis/reading.ts'
import { seriesReading } from '#app/analysis/series-input.ts'
import { chargeToMass } from '#app/physics/charge-to-mass.ts'
import { expectNear } from '#tests/support/near.ts'
import { bottomGun, sideGun } from './benches.ts'

const reading: Reading = {
  voltageVolts: 200.4,
  uVoltageVolts: 0,
  currentAmps: 1.52,
  uCurrentAmps: 0,
  leftEdges: [0.02],
  rightEdges: [0.1],
}
const { leftEdges: _left, rightEdges: _right, ...rest } = reading
const unread = { ...rest, leftEdges: [], rightEdges: [] }
const rungBench = { ...sideGun, scale: { kind: 'rungs' } } satisfies BudgetBench
const rung = {
  source: 'rung',
  diameterMetres: 0.08,
  uDiameterMetres: 0.0002,
  settingHalfWidthAmps: 0.012,
} satisfies GivenDiameter
const stated = { source: 'stated', diameterMetres: 0.122, uDiameterMetres: 0.002 } satisfies GivenDiameter

const partsOf = (result: ReturnType<typeof readingBudget>) => Object.keys(result.contributions)
const uOf = (result: ReturnType<typeof readingBudget>, name: string) =>
  result.contributions[name]?.standardUncertainty ?? Number.NaN
const slope = (f: (by: number) => number, h: number) =>
  (8 * (f(h) - f(-h)) - (f(2 * h) - f(-2 * h))) / (12 * h)

describe('a number that was written down', () => {
  it('is known to half of its last digit, whatever the meter’s own digit (rectangular, JCGM 100:2008, F.2.2.1)', () => {
    const typed = readingBudget({ ...reading, bench: sideGun, voltageDigitVolts: 1, currentDigitAmps: 0.01 })
    expectNear(uOf(typed, 'anodeResolution'), 1 / Math.sqrt(12), { rel: 1e-12 })
    expectNear(uOf(typed, 'coilResolution'), 0.01 / Math.sqrt(12), { rel: 1e-12 })
    const measured = readingBudget({ ...reading, bench: sideGun })
    expectNear(uOf(measured, 'anodeResolution'), 0.1 / Math.sqrt(12), { rel: 1e-12 })
    expect(typed.value).toBe(measured.value)
  })

  it('keeps the meter’s accuracy beside it', () => {
    const typed = readingBudget({ ...reading, bench: sideGun, voltageDigitVolts: 1 })
    // ±(0.1 % of 200.4 V + 2 × 0.1 V)
    expectNear(uOf(typed, 'anodeMeter'), 0.4004 / Math.sqrt(3), { rel: 1e-12 })
  })
})

describe('a reading at a rung', () => {
  const result = readingBudget({ ...unread, given: rung, bench: rungBench })

  it('has e/m as edges at that distance on a scale without parallax have it', () => {
    const read = readingBudget({ ...reading, bench: sideGun })
    expectNear(result.value, read.value, { rel: 1e-12 })
    expect(result.diameterMetres).toBe(0.08)
  })

  it('has the uncertainty of the setting in the current: the half-width over √3 (JCGM 100:2008, 4.3.7)', () => {
    expect(result.contributions.rungSetting).toMatchObject({ group: 'coil current', common: false })
    expectNear(uOf(result, 'rungSetting'), 0.012 / Math.sqrt(3), { rel: 1e-12 })
    const at = (by: number) =>
      readingBudget({ ...unread, currentAmps: 1.52 + by, given: rung, bench: rungBench }).value
    expectNear(result.contributions.rungSetting?.sensitivity ?? 0, slope(at, 0.003), { rel: 1e-6 })
  })

  it('has where the rung stands as a line that all readings share, and none of edges', () => {
    expect(result.contributions.rungDistance).toMatchObject({ group: 'rung', common: true })
    expect(uOf(result, 'rungDistance')).toBe(0.0002)
    const at = (by: number) =>
      readingBudget({ ...unread, given: { ...rung, diameterMetres: 0.08 + by }, bench: rungBench }).value
    expectNear(result.contributions.rungDistance?.sensitivity ?? 0, slope(at, 1e-4), { rel: 1e-6 })
    expect(partsOf(result).filter((name) => /edge|scale/i.test(name))).toEqual(['beamEdge'])
  })

  it('gives a series all that is its own in the current', () => {
    const point = seriesReading({ ...unread, given: rung, bench: rungBench }, result)
    expectNear(point.uCurrent, Math.hypot(0.012 / Math.sqrt(3), 0.001 / Math.sqrt(12)), { rel: 1e-12 })
    expect(point.uDiameter).toBe(0)
  })
})

describe('a diameter that others state', () => {
  const result = readingBudget({ ...unread, given: stated, bench: bottomGun })

  it('stands on the scale, so that its parallax is taken out: (L − δ)/L of this bench is 0.52/0.6', () => {
    expectNear(result.diameterMetres, (0.122 * 0.52) / 0.6, { rel: 1e-12 })
    const at = (by: number) =>
      readingBudget({ ...unread, given: { ...stated, diameterMetres: 0.122 + by }, bench: bottomGun }).value
    expectNear(result.contributions.statedDiameter?.sensitivity ?? 0, slope(at, 1e-4), { rel: 1e-6 })
    const read = readingBudget({ ...unread, leftEdges: [0], rightEdges: [0.122], bench: bottomGun })
    expectNear(
      result.contributions.scaleDistance?.sensitivity ?? 0,
      read.contributions.scaleDistance?.sensitivity ?? 1,
      { rel: 1e-12 },
    )
  })

  it('is the reading’s own in a series', () => {
    const point = seriesReading({ ...unread, given: stated, bench: bottomGun }, result)
    expectNear(point.uDiameter, (0.002 * 0.52) / 0.6, { rel: 1e-12 })
  })
})

describe('a field of which only its factor is known', () => {
  const {
    coilPair: _pair,
    gun: _gun,
    uTurns: _u,
    uRadiusMetres: _r,
    uSeparationMetres: _s,
    ...common
  } = sideGun
  const fieldFactor = { teslaPerAmp: 7.4e-4, standardUncertainty: 4e-6 }
  const bench: BudgetBench = { ...common, coilPair: null, fieldFactor }
  const result = readingBudget({ ...reading, bench })

  it('is taken to be even: 2V/((kIr)² − V²/c²) as it stands', () => {
    const plain = chargeToMass({ voltageVolts: 200.4, fieldTesla: 7.4e-4 * 1.52, radiusMetres: 0.04 })
    expectNear(result.value, plain, { rel: 1e-12 })
    expectNear(result.evenness, 1, { rel: 1e-12 })
  })

  it('has the factor’s uncertainty in place of a geometry: relatively 2u(k)/k', () => {
    const { contribution = 0 } = result.contributions.fieldFactor ?? {}
    expectNear(contribution / result.value, (2 * 4e-6) / 7.4e-4, { rel: 2e-3 })
    expect(partsOf(result).filter((name) => name.startsWith('coil'))).toEqual([
      'coilCurrent',
      'coilResolution',
      'coilMeter',
    ])
  })

  it('is refused by name where it is none', () => {
    const broken = { ...bench, fieldFactor: { ...fieldFactor, teslaPerAmp: 0 } }
    expect(() => readingBudget({ ...reading, bench: broken })).toThrow('fieldFactor.teslaPerAmp')
  })
})

describe('what belongs to another kind of scale', () => {
  it.each<[string, Partial<Reading>, BudgetBench]>([
    ['given must stand by itself', { ...reading, given: stated }, sideGun],
    ['leftEdges must be empty', reading, rungBench],
    ['given.source', { ...unread, given: rung }, sideGun],
    ['given.diameterMetres', { ...unread, given: { ...rung, diameterMetres: 0 } }, rungBench],
    ['given.uDiameterMetres', { ...unread, given: { ...rung, uDiameterMetres: -1 } }, rungBench],
    [
      'given.settingHalfWidthAmps',
      { ...unread, given: { ...rung, settingHalfWidthAmps: Number.NaN } },
      rungBench,
    ],
    ['voltageDigitVolts', { ...reading, voltageDigitVolts: -0.1 }, sideGun],
    ['currentDigitAmps', { ...reading, currentDigitAmps: Number.NaN }, sideGun],
  ])('is refused by name: %s', (name, change, bench) => {
    const call = () => readingBudget({ ...reading, ...change, bench })
    expect(call).toThrow(RangeError)
    expect(call).toThrow(name)
  })
})
