import { beforeEach, describe, expect, it } from 'vitest'
import { createWorkbench, type Workbench } from './workbench.ts'

let bench: Workbench
const supplyReads = (quantity: 'VOLT' | 'CURR', channel: number) =>
  bench.measure('supply', `MEAS:${quantity}? (@${channel})`)[0] ?? Number.NaN
const meterVolts = () => bench.measure('anode-meter', 'MEAS:VOLT?')[0] ?? Number.NaN
const isOn = () => bench.ask<{ on: Record<string, boolean> }>('setpoints').on

beforeEach(() => {
  bench = createWorkbench()
  bench.bringUp(200, 1.5)
})

describe('faults, at the terminals and as the instruments show them', () => {
  it('over-voltage: the anode goes high by the factor, past the supply’s own protection', () => {
    bench.say('supply', 'VOLT:PROT 210,(@2)')
    bench.fault('over-voltage', true)
    bench.wait(0.3)
    expect(bench.terminal().anodeVolts).toBeGreaterThan(228)
    expect(isOn()).toMatchObject({ anode: true })
    expect(supplyReads('VOLT', 2)).toBeGreaterThan(228)
    bench.wait(0.3)
    expect(meterVolts()).toBeGreaterThan(228)
    bench.say('supply', 'OUTP OFF,(@2)')
    bench.wait(0.5)
    expect(bench.terminal().anodeVolts).toBeLessThan(5)
    bench.fault('over-voltage', false)
    bench.say('supply', 'OUTP ON,(@2)')
    bench.wait(1)
    expect(bench.terminal().anodeVolts).toBeLessThan(201)
  })

  it('over-current: the coils go high by the factor, past the supply’s own protection', () => {
    bench.say('supply', 'CURR:PROT 1.6,(@3)')
    bench.fault('over-current', true, 1.3)
    bench.wait(1)
    expect(bench.terminal().coilAmps).toBeCloseTo(1.95, 1)
    expect(bench.measure('coil-meter', 'MEAS:CURR?')[0]).toBeCloseTo(1.95, 1)
    expect(supplyReads('CURR', 3)).toBeCloseTo(1.95, 1)
    expect(isOn()).toMatchObject({ coils: true })
  })

  it('anode-discharge: the anode current jumps and the voltage holds while the supply can give it', () => {
    bench.fault('anode-discharge', true, 0.012)
    bench.wait(0.1)
    expect(supplyReads('CURR', 2)).toBeCloseTo(0.012, 3)
    expect(bench.terminal().anodeVolts).toBeGreaterThan(199)
  })

  it('anode-discharge: the voltage breaks down at the current limit', () => {
    bench.say('supply', 'CURR 0.01,(@2)')
    bench.fault('anode-discharge', true)
    bench.wait(1)
    expect(supplyReads('CURR', 2)).toBeCloseTo(0.01, 3)
    expect(bench.terminal().anodeVolts).toBeLessThan(30)
  })

  it('anode-discharge: the supply’s own current protection acts after 0.2 s', () => {
    bench.say('supply', 'CURR:PROT 0.008,(@2)')
    bench.fault('anode-discharge', true)
    bench.wait(0.15)
    expect(supplyReads('CURR', 2)).toBeGreaterThan(0.008)
    bench.wait(0.15)
    expect(isOn()).toMatchObject({ anode: false })
    expect(bench.say('supply', 'STAT:QUES:COND?')).toBe('2')
  })

  it('heater-open: no heater current, full heater voltage, and the cathode cools', () => {
    bench.fault('heater-open', true)
    bench.wait(0.2)
    expect(supplyReads('CURR', 1)).toBeLessThan(0.01)
    expect(supplyReads('VOLT', 1)).toBeGreaterThan(6)
    bench.wait(20)
    expect(supplyReads('CURR', 2)).toBeLessThan(0.0002)
    expect(bench.bench.picture().points).toEqual([])
  })

  it('heater-sag: the heater voltage drops to the value', () => {
    bench.fault('heater-sag', true, 4.2)
    bench.wait(1)
    expect(bench.terminal().heaterVolts).toBeCloseTo(4.2, 2)
    expect(supplyReads('VOLT', 1)).toBeCloseTo(4.2, 1)
  })

  it('read-back: the supply says the setpoint while terminal and meter have another voltage', () => {
    bench.fault('read-back', true, 0.8)
    bench.wait(1)
    expect(supplyReads('VOLT', 2)).toBeCloseTo(200, -1)
    expect(Math.abs(supplyReads('VOLT', 2) - 200)).toBeLessThan(0.5)
    expect(bench.terminal().anodeVolts).toBeCloseTo(160, 0)
    expect(Math.abs(meterVolts() - 160)).toBeLessThan(0.5)
  })

  it('coil-hot: the coil is at the value, seen in its resistance, and cools when the fault is over', () => {
    bench.fault('coil-hot', true, 75)
    bench.wait(1)
    const ohms = supplyReads('VOLT', 3) / supplyReads('CURR', 3)
    // Copper: 4.30 Ω at 21 °C is 4.30 (234.45 + 75)/(234.45 + 21) at 75 °C (α₂₀ = 3.93e-3 /K, IEC 60028).
    expect(ohms).toBeCloseTo((4.3 * (234.45 + 75)) / (234.45 + 21), 1)
    expect(bench.ask('truth')).toMatchObject({ coilCelsius: 75 })
    bench.fault('coil-hot', false)
    bench.say('supply', 'OUTP OFF,(@3)')
    bench.wait(900)
    expect(bench.bench.model.coilCelsius).toBeLessThan(45)
  })

  it('meter-frozen: the anode meter repeats its last answer to the digit', () => {
    const last = bench.say('anode-meter', 'MEAS:VOLT?')
    bench.fault('meter-frozen', true)
    bench.say('supply', 'VOLT 100,(@2)')
    for (let count = 0; count < 20; count++) {
      bench.wait(0.1)
      expect(bench.say('anode-meter', 'MEAS:VOLT?')).toBe(last)
    }
    expect(bench.terminal().anodeVolts).toBeLessThan(101)
    bench.fault('meter-frozen', false)
    expect(meterVolts()).toBeLessThan(102)
  })
})

describe('asks', () => {
  it('power-cycle brings the bench back to its start with all faults cleared', () => {
    bench.fault('read-back', true)
    bench.ask('e-stop', { in: true })
    bench.ask('power-cycle')
    expect(bench.terminal()).toMatchObject({ anodeVolts: 0, heaterVolts: 0 })
    expect(bench.say('interlock', 'INT:STAT? (@1,2)')).toBe('1,1')
    bench.bringUp(200, 1.5)
    expect(meterVolts()).toBeGreaterThan(199)
  })

  it('set warms or cools the coils once', () => {
    bench.say('supply', 'OUTP OFF,(@3)')
    bench.ask('set', { coilCelsius: 55 })
    expect(bench.bench.model.coilCelsius).toBe(55)
    bench.wait(60)
    expect(bench.bench.model.coilCelsius).toBeLessThan(54)
  })

  it('truth tells the constants of the bench', () => {
    expect(bench.ask('truth')).toMatchObject({ benchId: 'bench-1', strayFieldTesla: { x: 0, y: 0, z: 0 } })
  })

  it('turning-points are null where the beam meets the glass or there is none', () => {
    bench.say('supply', 'OUTP OFF,(@3)')
    bench.wait(2)
    expect(bench.ask('turning-points')).toEqual({ leftMetres: null, rightMetres: null })
    bench.say('supply', 'OUTP OFF,(@2)')
    bench.wait(2)
    expect(bench.ask('turning-points')).toEqual({ leftMetres: null, rightMetres: null })
  })

  it.each([
    [{ ask: 'nonsense' }, 'ask'],
    [{ ask: 'fault', name: 'gremlin', on: true }, 'name'],
    [{ ask: 'e-stop' }, 'in'],
    [{ ask: 'terminal', bench: 'bench-9' }, 'bench-9'],
  ])('refuses %j and says why', (ask, word) => {
    const reply = bench.simulator.ask({ id: 7, bench: 'bench-1', ...ask })
    expect(reply).toMatchObject({ id: 7, ok: false })
    expect(reply.ok === false && reply.reason).toContain(word)
  })
})
