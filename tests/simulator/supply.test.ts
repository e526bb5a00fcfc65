import { beforeEach, describe, expect, it } from 'vitest'
import { createWorkbench, type Workbench } from './workbench.ts'

let bench: Workbench
const supply = (message: string) => bench.say('supply', message)
const error = () => supply('SYST:ERR?')

beforeEach(() => {
  bench = createWorkbench()
})

describe('the supply at power-on', () => {
  it('has all outputs off, what it regulates at zero and the other quantity at its range', () => {
    expect(supply('OUTP? (@1,2,3);:VOLT? (@1,2,3);:CURR? (@1,2,3)')).toBe(
      '0,0,0;0.000,0.00,30.000;2.000,0.02000,0.0000',
    )
  })

  it('comes back to that with *RST', () => {
    bench.bringUp(200, 1.5)
    supply('LINK:TIM 2;:OUTP:POL INV,(@1)')
    supply('*RST')
    expect(supply('OUTP? (@1,2,3);:VOLT? (@2);:CURR? (@3);:LINK:TIM?;:OUTP:POL? (@3)')).toBe(
      '0,0,0;0.00;0.0000;0;NORM',
    )
  })
})

describe('regulation', () => {
  it('holds voltage and current at the terminals inside the accuracy of the setting', () => {
    bench.bringUp(200, 1.5)
    const terminal = bench.terminal()
    // Data sheet of the virtual supply: anode 0.05 % + 0.1 V, coils 0.1 % + 1 mA, heater 0.1 % + 5 mV, and drift.
    expect(Math.abs(terminal.anodeVolts - 200)).toBeLessThan(0.3)
    expect(Math.abs(terminal.coilAmps - 1.5)).toBeLessThan(0.0035)
    expect(Math.abs(terminal.heaterVolts - 6.3)).toBeLessThan(0.02)
  })

  it('rises with its first-order time and does not step', () => {
    bench.bringUp(0, 0)
    supply('CURR 2,(@3)')
    bench.wait(0.05)
    expect(bench.terminal().coilAmps / 2).toBeCloseTo(1 - Math.exp(-1), 2)
  })

  it('goes over to constant voltage when the coils need more than the voltage set', () => {
    bench.bringUp(0, 0)
    supply('VOLT 4.3,(@3);CURR 2,(@3)')
    bench.wait(1)
    const [volts, amps] = bench.measure('supply', 'MEAS:VOLT? (@3);CURR? (@3)')
    expect(volts).toBeCloseTo(4.3, 1)
    expect(amps).toBeCloseTo(1, 1)
  })

  it('goes over to constant current when the tube draws more than the current set', () => {
    bench.bringUp(250, 1)
    const [free = 0] = bench.measure('supply', 'MEAS:CURR? (@2)')
    supply('CURR 0.0005,(@2)')
    bench.wait(1)
    const [volts = 0, amps = 0] = bench.measure('supply', 'MEAS:VOLT? (@2);CURR? (@2)')
    expect(free).toBeGreaterThan(0.0015)
    expect(amps).toBeCloseTo(0.0005, 4)
    expect(volts).toBeLessThan(130)
    expect(volts).toBeGreaterThan(50)
  })

  it('limits the inrush into the cold heater', () => {
    supply('VOLT 6.3,(@1);:OUTP ON,(@1)')
    bench.wait(0.3)
    const [volts = 0, amps = 0] = bench.measure('supply', 'MEAS:VOLT? (@1);CURR? (@1)')
    expect(amps).toBeCloseTo(2, 1)
    expect(volts).toBeLessThan(4)
  })

  it('leaves less than 5 V on the anode terminal within 0.5 s of OUTP OFF from 300 V', () => {
    bench.bringUp(300, 2)
    expect(bench.terminal().anodeVolts).toBeGreaterThan(299)
    supply('OUTP OFF,(@2)')
    // A bleeder of 0.08 s: ln(300 / 5) × 0.08 s = 0.33 s.
    bench.wait(0.3)
    expect(bench.terminal().anodeVolts).toBeGreaterThan(5)
    bench.wait(0.2)
    expect(bench.terminal().anodeVolts).toBeLessThan(5)
    expect(bench.measure('anode-meter', 'MEAS:VOLT?')[0]).toBeLessThan(5)
  })
})

describe('protection of the supply itself', () => {
  it('takes an output off above its voltage level and keeps it off until cleared', () => {
    supply('VOLT:PROT 120,(@2);:VOLT 100,(@2);:OUTP ON,(@2)')
    bench.wait(1)
    expect(supply('OUTP? (@2)')).toBe('1')
    supply('VOLT 150,(@2)')
    bench.wait(1)
    expect(supply('OUTP? (@2);:STAT:QUES:COND?')).toBe('0;1')
    supply('VOLT 100,(@2);:OUTP ON,(@2)')
    expect(error()).toBe('-221,"Settings conflict;over-voltage protection has tripped"')
    supply('OUTP:PROT:CLE (@2);:OUTP ON,(@2)')
    bench.wait(1)
    expect(supply('OUTP? (@2);:STAT:QUES:COND?')).toBe('1;0')
  })

  it('takes an output off above its current level after 0.2 s', () => {
    bench.bringUp(0, 1)
    supply('CURR:PROT 1.2,(@3);:CURR 1.5,(@3)')
    bench.wait(0.2)
    expect(supply('OUTP? (@3)')).toBe('1')
    bench.wait(0.2)
    expect(supply('OUTP? (@3);:STAT:QUES:COND?')).toBe('0;2')
  })
})

describe('polarity', () => {
  it('turns the field with the relay and reads the same sign before and after', () => {
    bench.bringUp(0, 0)
    supply('OUTP:POL INV,(@3);:CURR 1.5,(@3)')
    bench.wait(1)
    expect(error()).toBe('0,"No error"')
    expect(bench.terminal().coilAmps).toBeCloseTo(-1.5, 1)
    expect(bench.measure('supply', 'MEAS:CURR? (@3)')[0]).toBeCloseTo(1.5, 1)
    expect(bench.measure('coil-meter', 'MEAS:CURR?')[0]).toBeCloseTo(1.5, 1)
  })

  it('is refused while the channel carries current, and where there is no relay', () => {
    bench.bringUp(0, 1)
    supply('OUTP:POL INV,(@3)')
    expect(error()).toBe('-221,"Settings conflict;channel carries current"')
    expect(supply('OUTP:POL? (@3)')).toBe('NORM')
    supply('OUTP:POL INV,(@2)')
    expect(error()).toBe('-241,"Hardware missing;no relay"')
  })
})

describe('the watchdog of the supply, an extension of its own', () => {
  it('takes all outputs off when no message came for its time and keeps the setpoints', () => {
    bench.bringUp(200, 1.5)
    supply('LINK:TIM 2')
    for (let second = 0; second < 5; second++) {
      bench.wait(1.9)
      expect(supply('OUTP? (@1:3)')).toBe('1,1,1')
    }
    bench.wait(1.99)
    bench.simulator.advance()
    expect(bench.ask('setpoints')).toMatchObject({ on: { heater: true, anode: true, coils: true } })
    bench.wait(0.02)
    expect(bench.ask('setpoints')).toEqual({
      anodeVolts: 200,
      coilAmps: 1.5,
      heaterVolts: 6.3,
      on: { heater: false, anode: false, coils: false },
    })
    bench.wait(0.5)
    expect(bench.terminal().anodeVolts).toBeLessThan(5)
    expect(supply('STAT:QUES:COND?')).toBe('1024')
    supply('OUTP ON,(@1)')
    expect(supply('OUTP? (@1);:STAT:QUES:COND?')).toBe('1;0')
  })

  it('is not fed by a message with a command error', () => {
    bench.bringUp(200, 1.5)
    supply('LINK:TIM 2')
    bench.wait(1.5)
    supply('NOSUCH')
    bench.wait(1)
    expect(supply('OUTP? (@2)')).toBe('0')
  })

  it('is off at 0 and refuses what is out of its range', () => {
    bench.bringUp(200, 1.5)
    bench.wait(100)
    expect(supply('OUTP? (@2);:LINK:TIM?')).toBe('1;0')
    supply('LINK:TIM 4000')
    expect(error()).toBe('-222,"Data out of range"')
    supply('LINK:TIM 2500 MS')
    expect(supply('LINK:TIM?')).toBe('2.5')
  })
})

describe('e-stop and enclosure, in hardware', () => {
  it.each([
    ['e-stop', { in: true }, { in: false }, '0,1'],
    ['enclosure', { open: true }, { open: false }, '1,0'],
  ])('%s takes anode and coils off with nobody connected', (name, opened, closed, contacts) => {
    bench.bringUp(300, 1.5)
    bench.ask(name, opened)
    bench.wait(0.5)
    const terminal = bench.terminal()
    expect(terminal.anodeVolts).toBeLessThan(5)
    expect(Math.abs(terminal.coilAmps)).toBeLessThan(0.01)
    expect(terminal.heaterVolts).toBeGreaterThan(6)
    expect(bench.say('interlock', 'INT:STAT? (@1,2)')).toBe(contacts)
    expect(supply('OUTP? (@1,2,3);:STAT:QUES:COND?')).toBe('1,0,0;512')
    supply('OUTP ON,(@2)')
    expect(error()).toBe('-221,"Settings conflict;interlock open"')

    bench.ask(name, closed)
    bench.wait(5)
    expect(bench.terminal().anodeVolts).toBeLessThan(5)
    expect(bench.ask('setpoints')).toMatchObject({ anodeVolts: 300, on: { anode: false, coils: false } })
    supply('OUTP ON,(@2)')
    bench.wait(1)
    expect(bench.terminal().anodeVolts).toBeGreaterThan(299)
  })
})
