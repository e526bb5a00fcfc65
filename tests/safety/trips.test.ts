import { describe, expect, it } from 'vitest'
import { interlockChain } from '#app/safety/chain.ts'
import { startMachine, tripDeadMan } from '#app/safety/machine.ts'
import { type ChannelValues, detectionSeconds, type TripKind } from '#app/safety/types.ts'
import type { BenchView } from '#app/safety/view.ts'
import { limits, liveMachine, run, valuesOf, viewAt } from './bench-view.ts'

const withValues = (changes: Partial<ChannelValues>) => (at: number) =>
  viewAt(at, {}, { values: { ...valuesOf(), ...changes } })

const lastGoodBefore = (at: number): BenchView => {
  const view = viewAt(at)
  return {
    ...view,
    values: { ...view.values, anodeVolts: null },
    lastGoodAt: { ...view.lastGoodAt, anodeVolts: 20 },
  }
}

const faults: [Exclude<TripKind, 'dead-man'>, (at: number) => BenchView][] = [
  ['e-stop', (at) => viewAt(at, {}, { interlock: { eStopOut: false, enclosureClosed: true } })],
  ['enclosure', (at) => viewAt(at, {}, { interlock: { eStopOut: true, enclosureClosed: false } })],
  ['over-voltage', withValues({ anodeVolts: 310, anodeSupplyVolts: 310 })],
  ['over-voltage', withValues({ anodeVolts: 240, anodeSupplyVolts: 240 })],
  ['over-current', withValues({ coilAmps: 2.2, coilSupplyAmps: 2.2 })],
  ['over-current', withValues({ coilAmps: 1.3, coilSupplyAmps: 1.3 })],
  ['anode-current', withValues({ anodeAmps: 0.009 })],
  ['read-back', withValues({ anodeVolts: 180 })],
  ['read-back', withValues({ anodeVolts: 190, anodeSupplyVolts: 190 })],
  ['read-back', withValues({ coilAmps: 0.9 })],
  ['stale-channel', lastGoodBefore],
  ['heater', withValues({ heaterAmps: 0 })],
  ['heater', withValues({ heaterVolts: 5.9 })],
  ['heater', withValues({ heaterVolts: 6.7 })],
  ['coil-temperature', withValues({ coilCelsius: 60.5 })],
  ['lost-line', (at) => viewAt(at, {}, { lostLines: ['supply'] })],
]

describe('A fault of a live bench', () => {
  it.each(faults)(
    'trips as %s within its stated time of the first bad sample, once, and is latched',
    (kind, view) => {
      const { machine, happened } = run(liveMachine(), 20.1, 24, view)
      const trips = happened.filter(({ what }) => what.kind === 'trip')
      expect(trips).toHaveLength(1)
      expect(machine.trip?.kind).toBe(kind)
      // From the last good sample for a stale channel, from the first bad one for the others.
      const from = kind === 'stale-channel' ? 20 : 20.1
      expect((trips[0]?.at ?? 99) - from).toBeLessThanOrEqual(detectionSeconds[kind] + 1e-9)
      expect(happened.filter(({ what }) => what.kind === 'shutdown').length).toBeGreaterThan(0)
      const after = run(machine, 24.1, 26, (at) => viewAt(at, { anode: 0, coils: 0 }))
      expect(after.machine.trip?.kind).toBe(kind)
      expect(after.machine.phase).toBe('tripped')
    },
  )

  it.each([
    ['read-back', withValues({ anodeVolts: 180 }), 0.8],
    ['heater', withValues({ heaterVolts: 5.5 }), 0.8],
    ['coil-temperature', withValues({ coilCelsius: 61 }), 0.6],
  ] as const)(
    'of the kind %s does not trip when it is gone sooner than it is confirmed',
    (_, view, seconds) => {
      const dip = run(liveMachine(), 20.1, 20.1 + seconds, view)
      const back = run(dip.machine, 20.2 + seconds, 23, (at) => viewAt(at))
      expect(back.machine.trip).toBeNull()
      expect(back.machine.phase).toBe('live')
    },
  )

  it('keeps the chain closed in the drawing until the trip, and open after it', () => {
    const view = withValues({ heaterVolts: 5.5 })
    const dip = run(liveMachine(), 20.1, 20.6, view)
    const open = (machine: typeof dip.machine, at: number) =>
      interlockChain(view(at), machine.warmUp, machine.trip).filter(({ closed }) => !closed)
    expect(open(dip.machine, 20.6)).toEqual([])
    const tripped = run(dip.machine, 20.7, 22, view).machine
    expect(open(tripped, 22).map(({ name }) => name)).toEqual(expect.arrayContaining(['heater', 'no-trip']))
  })

  it('names the measured value and the limit, and what to do', () => {
    const { machine } = run(liveMachine(), 20.1, 21, withValues({ anodeVolts: 310, anodeSupplyVolts: 309 }))
    expect(machine.trip?.happened).toBe("310 V at the anode; the bench's limit is 300 V.")
    expect(machine.trip?.toDo).toMatch(/technician/)
  })
})

describe('A ramp', () => {
  it('may trail its setpoint and pass from supply to meter without a trip', () => {
    const ramping = (at: number): BenchView => {
      const commanded = Math.min(290, 200 + 80 * (at - 20))
      const view = viewAt(at)
      const anode = { on: true, asked: 290, commanded, changedAt: Math.min(at, 21.1) }
      return {
        ...view,
        outputs: { ...view.outputs, anode },
        values: { ...view.values, anodeSupplyVolts: commanded - 8, anodeVolts: commanded - 20 },
      }
    }
    expect(run(liveMachine(), 20.1, 21.1, ramping).machine.trip).toBeNull()
  })
})

describe('With the anode off', () => {
  const idle = (at: number) => viewAt(at, { anode: 0, coils: 0 })

  it.each([
    ['heater', { heaterAmps: 0 }],
    ['over-current', { coilAmps: 2.5, coilSupplyAmps: 2.5 }],
    ['over-voltage', { anodeVolts: 310 }],
    ['read-back', { anodeVolts: 40, anodeSupplyVolts: 40 }],
    ['coil-temperature', { coilCelsius: 61 }],
  ] as const)('a bench still trips by %s', (kind, changes) => {
    const warm = run(startMachine(0), 8, 20, idle).machine
    const { machine } = run(warm, 20.1, 23, (at) => {
      const view = idle(at)
      return { ...view, values: { ...view.values, ...changes } }
    })
    expect(machine.trip?.kind).toBe(kind)
  })

  it('an enclosure or an e-stop opens its contact and does not latch while nothing is on', () => {
    const { machine, happened } = run(startMachine(0), 8, 12, (at) =>
      viewAt(
        at,
        { heater: 0, anode: 0, coils: 0 },
        { interlock: { eStopOut: false, enclosureClosed: false } },
      ),
    )
    expect(machine.trip).toBeNull()
    expect(machine.phase).toBe('off')
    const told = happened.flatMap(({ what }) => (what.kind === 'interlock' ? [what.contact] : []))
    expect(told).toEqual(['e-stop', 'enclosure'])
  })

  it('an e-stop latches with the heater on, and takes the heater down as well', () => {
    const pressed = { interlock: { eStopOut: false, enclosureClosed: true } }
    const { machine, happened } = run(startMachine(0), 8, 9, (at) =>
      viewAt(at, { anode: 0, coils: 0 }, pressed),
    )
    expect(machine.trip?.kind).toBe('e-stop')
    expect(happened.some(({ what }) => what.kind === 'shutdown' && what.heater)).toBe(true)
  })
})

describe('A trip takes the heater', () => {
  const enclosure = (heaterOffOnTrip: boolean) => (at: number) => {
    const view = viewAt(at, {}, { interlock: { eStopOut: true, enclosureClosed: false } })
    return {
      ...view,
      config: view.config && { ...view.config, limits: { ...limits, heaterOffOnTrip } },
    }
  }
  it.each([true, false])('down as the bench says (%s)', (heaterOffOnTrip) => {
    const { happened } = run(liveMachine(), 20.1, 20.2, enclosure(heaterOffOnTrip))
    const shutdown = happened.find(({ what }) => what.kind === 'shutdown')?.what
    expect(shutdown).toMatchObject({ heater: heaterOffOnTrip })
  })
})

describe('A second fault', () => {
  it('while tripped takes down what is still on, and the first trip stays', () => {
    const first = run(liveMachine(), 20.1, 20.3, (at) =>
      viewAt(at, {}, { interlock: { eStopOut: true, enclosureClosed: false } }),
    )
    const { machine, happened } = run(first.machine, 20.4, 20.6, (at) =>
      viewAt(at, { anode: 0, coils: 0 }, { interlock: { eStopOut: false, enclosureClosed: false } }),
    )
    expect(machine.trip?.kind).toBe('enclosure')
    expect(happened.filter(({ what }) => what.kind === 'shutdown')).toHaveLength(1)
  })
})

describe('A fault that a technician alone may reset', () => {
  it('takes the place of a trip that others may reset, and tells of both', () => {
    const first = run(liveMachine(), 20.1, 20.3, (at) =>
      viewAt(at, {}, { interlock: { eStopOut: true, enclosureClosed: false } }),
    )
    const { machine, happened } = run(first.machine, 20.4, 20.6, (at) => {
      const view = viewAt(at, { anode: 0, coils: 0 })
      return { ...view, values: { ...view.values, anodeVolts: 340 } }
    })
    expect(machine.trip?.kind).toBe('over-voltage')
    expect(machine.trip?.happened).toMatch(/340 V at the anode.*The enclosure was opened/)
    expect(happened.filter(({ what }) => what.kind === 'trip')).toHaveLength(1)
  })

  it('is latched when it comes in the same moment as another', () => {
    const { machine } = run(liveMachine(), 20.1, 20.2, (at) => {
      const view = viewAt(at, {}, { interlock: { eStopOut: false, enclosureClosed: true } })
      return { ...view, values: { ...view.values, anodeVolts: 340, anodeSupplyVolts: 340 } }
    })
    expect(machine.trip?.kind).toBe('over-voltage')
  })
})

describe('The dead-man', () => {
  it('latches its own trip, but does not hide an earlier one', () => {
    const seen = { wallAt: 1, name: 'The student', lost: 'input' as const, minutes: 10 }
    const { machine, trip } = tripDeadMan(liveMachine(), seen)
    expect(machine.trip).toEqual(trip)
    expect(trip.happened).toBe('The student, who was at the controls, gave no sign for 10 min.')
    const earlier = run(liveMachine(), 20.1, 20.5, withValues({ anodeAmps: 0.009 })).machine
    expect(tripDeadMan(earlier, seen).machine.trip?.kind).toBe('anode-current')
  })
})
