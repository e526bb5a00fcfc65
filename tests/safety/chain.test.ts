import { describe, expect, it } from 'vitest'
import { interlockChain, isAnodePermitted } from '#app/safety/chain.ts'
import { startMachine, warningsOf } from '#app/safety/machine.ts'
import { type ContactName, contactNames, type Trip } from '#app/safety/types.ts'
import type { BenchView } from '#app/safety/view.ts'
import { heaterGraceSeconds } from '#app/safety/warm-up.ts'
import { actor, limits, liveMachine, run, valuesOf, viewAt } from './bench-view.ts'

const ready = (at: number, changes: Partial<BenchView> = {}) => viewAt(at, { anode: 0, coils: 0 }, changes)
const readyValues = valuesOf({ anode: 0, coils: 0 })
const readyMachine = () => run(startMachine(0), 8, 20, (at) => ready(at)).machine

const trip: Trip = {
  kind: 'enclosure',
  at: 0,
  happened: 'The enclosure was opened.',
  toDo: 'Close it, then reset.',
}

const openings: [ContactName, Partial<BenchView>, RegExp][] = [
  ['commissioned', { config: null }, /technician/],
  ['e-stop', { interlock: { eStopOut: false, enclosureClosed: true } }, /pull it out/],
  ['e-stop', { interlock: null }, /check its cable/],
  ['enclosure', { interlock: { eStopOut: true, enclosureClosed: false } }, /close it/],
  ['heater', { values: { ...readyValues, heaterVolts: 5.9 } }, /5.9 V and its band is 6 V to 6.6 V/],
  ['heater', { values: { ...readyValues, heaterAmps: 0 } }, /check the heater/],
  [
    'coil-temperature',
    { values: { ...readyValues, coilCelsius: 60 } },
    /60 °C and the limit is 60 °C: let them cool/,
  ],
  ['coil-temperature', { values: { ...readyValues, coilCelsius: null } }, /not known/],
  ['signal', { lostLines: ['coil meter'] }, /coil meter is lost/],
  ['signal', { prepared: false }, /read back as off/],
  ['signal', { interlockAt: 18.5 }, /No fresh reading of interlock unit/],
  ['read-back', { values: { ...readyValues, anodeVolts: 50, anodeSupplyVolts: 50 } }, /50 V measured/],
  ['controls', { holder: null }, /take the controls/],
  ['controls', { holder: { ...actor('student', { acknowledged: false }), since: 0 } }, /acknowledge/],
]

describe('The interlock chain', () => {
  it('names every contact once, in the order of its drawing, and permits the anode with all closed', () => {
    const { warmUp } = readyMachine()
    const chain = interlockChain(ready(20), warmUp, null)
    expect(chain.map(({ name }) => name)).toEqual([...contactNames])
    expect(chain.filter(({ closed }) => !closed)).toEqual([])
    expect(chain.every(({ reason }) => reason === null)).toBe(true)
    expect(isAnodePermitted(chain)).toBe(true)
  })

  it.each(openings)(
    'opens %s for %j and says what stops the anode and what to do',
    (name, changes, reason) => {
      const { warmUp } = readyMachine()
      const chain = interlockChain(ready(20, changes), warmUp, null)
      const contact = chain.find((one) => one.name === name)
      expect(contact?.closed).toBe(false)
      expect(contact?.reason).toMatch(reason)
      expect(contact?.measured).not.toBe('')
      expect(isAnodePermitted(chain)).toBe(false)
    },
  )

  it('opens for a latched trip alone', () => {
    const chain = interlockChain(ready(20), readyMachine().warmUp, trip)
    expect(chain.filter(({ closed }) => !closed).map(({ name }) => name)).toEqual(['no-trip'])
  })

  it('opens warm-up with the heater off or cold, counting in words', () => {
    const cold = run(startMachine(0), 8, 12, (at) => ready(at)).machine
    const warmUp = interlockChain(ready(12), cold.warmUp, null).find(({ name }) => name === 'warm-up')
    expect(warmUp).toMatchObject({ closed: false, measured: '4 of 10 s' })
    expect(warmUp?.reason).toMatch(/wait \d s more/)
  })
})

describe('The phase', () => {
  it('goes from lost over off, warming and ready to live', () => {
    const phases: string[] = []
    const note = ({ happened }: ReturnType<typeof run>) => {
      for (const { what } of happened) if (what.kind === 'phase') phases.push(what.to)
    }
    const first = run(startMachine(0), 1, 2, (at) => viewAt(at, { heater: 0, anode: 0, coils: 0 }))
    note(first)
    const second = run(first.machine, 3, 14, (at) => ready(at))
    note(second)
    const third = run(second.machine, 14.1, 15, (at) => viewAt(at))
    note(third)
    note(run(third.machine, 15.1, 16, (at) => viewAt(at, {}, { config: null })))
    expect(phases).toEqual(['off', 'warming', 'ready', 'live', 'unconfigured'])
  })

  it('is lost while a line is lost, whatever else holds, and says that the voltage is unknown', () => {
    const view = (at: number) => viewAt(at, {}, { lostLines: ['supply'] })
    const { machine } = run(liveMachine(), 20.1, 21, view)
    expect(machine.phase).toBe('lost')
    expect(warningsOf(machine, view(21), null).join()).toMatch(/treat the tube as live.*voltage unknown/)
  })
})

describe('The warm-up', () => {
  const dip = (seconds: number) => {
    const out = run(readyMachine(), 20.1, 20.1 + seconds, (at) =>
      ready(at, { values: { ...readyValues, heaterVolts: 5.95 } }),
    )
    return run(out.machine, 20.2 + seconds, 20.3 + seconds, (at) => ready(at)).machine.warmUp
  }

  it('is kept by an excursion of less than two seconds, and started again by a longer one', () => {
    expect(heaterGraceSeconds).toBe(2)
    expect(dip(1.8).elapsedSeconds).toBeGreaterThanOrEqual(limits.warmUpSeconds)
    expect(dip(2.1).elapsedSeconds).toBeLessThan(1)
  })

  it('does not count a pause in which nothing was sampled', () => {
    const begun = run(startMachine(0), 8, 10, (at) => ready(at)).machine
    const { machine } = run(begun, 70, 70.1, (at) => ready(at))
    expect(machine.warmUp.elapsedSeconds).toBeLessThan(3.2)
  })

  it('counts only the time in band, and ends with the heater', () => {
    const { machine } = run(startMachine(0), 8, 13, (at) =>
      ready(at, { values: { ...readyValues, heaterVolts: at < 10 ? 4 : 6.3 } }),
    )
    expect(machine.warmUp.elapsedSeconds).toBeCloseTo(3, 1)
    const off = run(machine, 13.1, 13.2, (at) => viewAt(at, { heater: 0, anode: 0, coils: 0 })).machine
    expect(off.warmUp.elapsedSeconds).toBe(0)
  })
})
