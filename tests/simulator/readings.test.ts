import { describe, expect, it } from 'vitest'
import { moments } from './sample-moments.ts'
import { createWorkbench } from './workbench.ts'

describe('what the instruments show', () => {
  it('moves in the last digit with noise, about a mean inside the accuracy of the meter', () => {
    const bench = createWorkbench()
    bench.bringUp(200, 1.5)
    const shown: number[] = []
    const truth: number[] = []
    for (let count = 0; count < 400; count++) {
      bench.wait(0.1)
      shown.push(bench.measure('anode-meter', 'MEAS:VOLT?')[0] ?? Number.NaN)
      truth.push(bench.terminal().anodeVolts)
    }
    expect(shown.every((value) => Math.abs(value * 100 - Math.round(value * 100)) < 1e-6)).toBe(true)
    expect(moments(shown).deviation).toBeGreaterThan(0.02)
    expect(moments(shown).deviation).toBeLessThan(0.08)
    // Data sheet of the virtual meter: 0.1 % of reading and 2 digits of 0.01 V.
    expect(Math.abs(moments(shown).mean - moments(truth).mean)).toBeLessThan(0.2 + 0.02 + 0.01)
  })

  it('has the same gain error for the same seed and another for another', () => {
    const errorOf = (seed: number) => {
      const bench = createWorkbench({ seed })
      bench.bringUp(300, 2)
      const readings = Array.from({ length: 200 }, () => {
        bench.wait(0.1)
        return (bench.measure('coil-meter', 'MEAS:CURR?')[0] ?? Number.NaN) - bench.terminal().coilAmps
      })
      return moments(readings).mean
    }
    expect(errorOf(4)).toBe(errorOf(4))
    expect(Math.abs(errorOf(4) - errorOf(5))).toBeGreaterThan(1e-4)
  })

  it.each([
    ['bench-1', 0],
    ['bench-2', 0.6],
    ['bench-3', -0.9],
  ])('the anode meter of %s is off by %f V at zero', (benchId, offset) => {
    const bench = createWorkbench({ benchId })
    const readings = Array.from({ length: 200 }, () => {
      bench.wait(0.1)
      return bench.measure('anode-meter', 'MEAS:VOLT?')[0] ?? Number.NaN
    })
    expect(Math.abs(moments(readings).mean - offset)).toBeLessThan(0.02 + 0.01)
  })

  it('has ripple that the supply sees and the meter filters', () => {
    const bench = createWorkbench()
    bench.bringUp(250, 1)
    const spread = (instrument: 'supply' | 'anode-meter', message: string) =>
      moments(
        Array.from({ length: 300 }, () => {
          bench.wait(0.103)
          return bench.measure(instrument, message)[0] ?? Number.NaN
        }),
      ).deviation
    expect(spread('supply', 'MEAS:VOLT? (@2)')).toBeGreaterThan(0.03)
    expect(spread('anode-meter', 'MEAS:VOLT?')).toBeLessThan(0.08)
  })

  it('drifts slowly: minutes apart it differs by more than within seconds', () => {
    const bench = createWorkbench()
    bench.bringUp(250, 1)
    const near: number[] = []
    const far: number[] = []
    for (let count = 0; count < 100; count++) {
      const before = bench.terminal().anodeVolts
      bench.wait(1)
      near.push(bench.terminal().anodeVolts - before)
      bench.wait(299)
      far.push(bench.terminal().anodeVolts - before)
    }
    expect(moments(far).deviation).toBeGreaterThan(3 * moments(near).deviation)
    expect(moments(far).deviation).toBeLessThan(0.1)
  })

  it('settles with the time constant of the meter', () => {
    const bench = createWorkbench()
    bench.bringUp(0, 0)
    bench.say('supply', 'VOLT 300,(@2)')
    bench.wait(0.1)
    const [early = 0] = bench.measure('anode-meter', 'MEAS:VOLT?')
    expect(bench.terminal().anodeVolts).toBeGreaterThan(295)
    expect(early).toBeLessThan(260)
    bench.wait(0.5)
    expect(bench.measure('anode-meter', 'MEAS:VOLT?')[0]).toBeGreaterThan(299)
  })
})
