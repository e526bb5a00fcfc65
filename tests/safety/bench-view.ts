import { advance, type Happening, type Machine, startMachine } from '#app/safety/machine.ts'
import {
  type Actor,
  type BenchLimits,
  type Channel,
  type ChannelValues,
  channels,
} from '#app/safety/types.ts'
import type { BenchView, OutputView } from '#app/safety/view.ts'

export const limits: BenchLimits = {
  anodeVolts: 300,
  anodeAmps: 0.008,
  coilAmps: 2,
  coilCelsius: 60,
  heaterVolts: { nominal: 6.3, low: 6, high: 6.6 },
  warmUpSeconds: 10,
  anodeVoltsPerSecond: 80,
  coilAmpsPerSecond: 1,
  readBack: { anodeVolts: 6, coilAmps: 0.05 },
  deadManMinutes: 10,
  heaterOffOnTrip: false,
  studentMayReset: true,
}

export const actor = (role: Actor['role'], changes: Partial<Actor> = {}): Actor => ({
  personId: `a-${role}`,
  name: `The ${role}`,
  role,
  acknowledged: true,
  ...changes,
})

const output = (value: number): OutputView => ({
  on: value > 0,
  asked: value,
  commanded: value,
  changedAt: 0,
})

type Setting = { heater?: number; anode?: number; coils?: number }

/** What the instruments read when all is in order. */
export function valuesOf({ heater = 6.3, anode = 200, coils = 1 }: Setting = {}): ChannelValues {
  return {
    heaterVolts: heater,
    heaterAmps: heater / 6.3,
    anodeVolts: anode,
    anodeSupplyVolts: anode,
    anodeAmps: anode * 1e-5,
    coilAmps: coils,
    coilSupplyAmps: coils,
    coilVolts: coils * 4.3,
    coilCelsius: 30,
  }
}

/** A bench in order at `at`, with the outputs at these values and the student at the controls. */
export function viewAt(at: number, setting: Setting = {}, changes: Partial<BenchView> = {}): BenchView {
  const { heater = 6.3, anode = 200, coils = 1 } = setting
  return {
    at,
    config: { limits, ranges: { anodeVolts: 350, coilAmps: 3.5 }, coilsReversible: true },
    lostLines: [],
    prepared: true,
    values: valuesOf(setting),
    lastGoodAt: Object.fromEntries(channels.map((channel) => [channel, at])) as Record<Channel, number>,
    interlock: { eStopOut: true, enclosureClosed: true },
    interlockAt: at,
    outputs: { heater: output(heater), anode: output(anode), coils: output(coils) },
    polarityChanging: false,
    holder: { ...actor('student'), since: 0 },
    ...changes,
  }
}

/** Steps a machine over views at 10 Hz from `from` to `to`, and keeps what happened with its time. */
export function run(
  machine: Machine,
  from: number,
  to: number,
  view: (at: number) => BenchView,
): { machine: Machine; happened: { at: number; what: Happening }[] } {
  const happened: { at: number; what: Happening }[] = []
  let current = machine
  for (let step = 0; from + step / 10 <= to + 1e-9; step++) {
    const at = from + step / 10
    const next = advance(current, view(at), at + 1e9)
    current = next.machine
    for (const what of next.happenings) happened.push({ at, what })
  }
  return { machine: current, happened }
}

/** A machine that has warmed up, and is live from 20 s on. */
export function liveMachine(): Machine {
  return run(startMachine(0), 8, 20, (at) => viewAt(at)).machine
}
