import { detectionSeconds, type TripKind } from './types.ts'
import {
  anyOutputOn,
  type BenchView,
  channelWords,
  dischargedVolts,
  heaterOpenAmps,
  type SafetyConfig,
  staleSignals,
} from './view.ts'
import type { WarmUp } from './warm-up.ts'
import { inAmps, inCelsius, inMilliamps, inSeconds, inVolts, listed } from './words.ts'

export type FaultKind = Exclude<TripKind, 'dead-man'>
/** `heaterOff`: the heater goes down with this fault, whatever the bench says of other trips. */
export type Fault = { kind: FaultKind; happened: string; toDo: string; heaterOff: boolean }

/**
 * How long a fault must stand before it trips, counted from the first bad sample (from the last good one for a
 * stale channel). Shorter than the stated detection times by the sampling and by the scheduling of a busy host.
 */
export const confirmSeconds: Record<FaultKind, number> = {
  'e-stop': 0,
  enclosure: 0,
  'over-voltage': 0,
  'over-current': 0,
  'anode-current': 0,
  'read-back': 1,
  'stale-channel': detectionSeconds['stale-channel'] - 0.3,
  heater: 1,
  'coil-temperature': 0.8,
  'lost-line': 0,
}

/** A setpoint counts as reached so long after the last step of its ramp. */
const settleSeconds = 0.5
/** How far a reading may trail its ramp. */
const rampLagSeconds = 0.3
/** Time for a cold heater, which draws all the current that its supply gives, to come into its band. */
const heaterStartSeconds = 6
/** Time for an output to fall once it is switched off, before a remaining value is a fault. */
const fallenSeconds = 1

/** Every fault present at this moment, the fastest first. Whether it has stood long enough to trip is `stepFaults`. */
export function faultsNow(view: BenchView, warmUp: WarmUp): Fault[] {
  if (view.config === null) return []
  return [
    eStop(view),
    enclosure(view),
    lostLine(view),
    overVoltage(view, view.config),
    overCurrent(view, view.config),
    anodeCurrent(view, view.config),
    anodeReadBack(view, view.config) ?? coilReadBack(view, view.config),
    staleChannel(view),
    heater(view, view.config, warmUp),
    coilTemperature(view, view.config),
  ].filter((fault) => fault !== null)
}

/** When each present fault was first seen: the state of `stepFaults`. */
export type FaultTimes = Partial<Record<FaultKind, number>>

/** Carries the times on by one view, and names the faults that have stood for their confirming time. */
export function stepFaults(
  times: FaultTimes,
  faults: readonly Fault[],
  at: number,
): { times: FaultTimes; confirmed: Fault[] } {
  const next: FaultTimes = {}
  for (const fault of faults) next[fault.kind] = times[fault.kind] ?? at
  const confirmed = faults.filter(
    // A millisecond of slack, so that samples exactly the confirming time apart are not split by rounding.
    (fault) => at - (next[fault.kind] ?? at) >= stands(fault.kind) - 0.001,
  )
  return { times: next, confirmed }
}

/** A stale channel is only a fault once its age has passed the confirming time: no second wait. */
const stands = (kind: FaultKind): number => (kind === 'stale-channel' ? 0 : confirmSeconds[kind])

/** Latches with any output on; with everything off it only opens its contact. */
function eStop(view: BenchView): Fault | null {
  if (view.interlock?.eStopOut !== false || !anyOutputOn(view)) return null
  return {
    kind: 'e-stop',
    happened: 'The emergency stop was pressed.',
    toDo: 'Find out why, pull the emergency stop out, then reset.',
    heaterOff: true,
  }
}

/** Latches with anode or coils on, which its contact interrupts; otherwise it only opens its contact. */
function enclosure(view: BenchView): Fault | null {
  const { anode, coils } = view.outputs
  if (view.interlock?.enclosureClosed !== false || !(anode.on || coils.on)) return null
  return {
    kind: 'enclosure',
    happened: `The enclosure was opened with the ${anode.on ? 'anode' : 'coils'} on.`,
    toDo: 'Close the enclosure, then reset.',
    heaterOff: false,
  }
}

function lostLine(view: BenchView): Fault | null {
  if (view.lostLines.length === 0 || !anyOutputOn(view)) return null
  return {
    kind: 'lost-line',
    happened: `The line to the ${listed(view.lostLines)} was lost.`,
    toDo: 'Treat the tube as live, check the cable and the instrument, wait until it answers, then reset.',
    heaterOff: true,
  }
}

const allowance = (commanded: number, tolerance: number, perSecond: number, reached: boolean): number =>
  Math.max(0.1 * commanded, 3 * tolerance) + (reached ? 0 : perSecond * rampLagSeconds)

/** Above the bench's limit on either instrument, or well above what was commanded on both. */
function overVoltage(view: BenchView, { limits }: SafetyConfig): Fault | null {
  const readings = [view.values.anodeVolts, view.values.anodeSupplyVolts].filter((volts) => volts !== null)
  if (readings.length === 0) return null
  const tolerance = limits.readBack.anodeVolts
  const highest = Math.max(...readings)
  const toDo = 'Have a technician check the anode supply before anyone resets.'
  if (highest > limits.anodeVolts + tolerance) {
    return {
      kind: 'over-voltage',
      happened: `${inVolts(highest)} at the anode; the bench's limit is ${inVolts(limits.anodeVolts)}.`,
      toDo,
      heaterOff: false,
    }
  }
  const { on, commanded, changedAt } = view.outputs.anode
  const reached = view.at - changedAt >= settleSeconds
  const lowest = Math.min(...readings)
  if (
    on &&
    readings.length === 2 &&
    lowest > commanded + allowance(commanded, tolerance, limits.anodeVoltsPerSecond, reached)
  ) {
    return {
      kind: 'over-voltage',
      happened: `${inVolts(highest)} at the anode, where ${inVolts(commanded)} was commanded.`,
      toDo,
      heaterOff: false,
    }
  }
  return null
}

function overCurrent(view: BenchView, { limits }: SafetyConfig): Fault | null {
  const readings = [view.values.coilAmps, view.values.coilSupplyAmps]
    .filter((amps) => amps !== null)
    .map((amps) => Math.abs(amps))
  if (readings.length === 0) return null
  const tolerance = limits.readBack.coilAmps
  const highest = Math.max(...readings)
  const toDo = 'Check the coil supply and the leads, then reset.'
  if (highest > limits.coilAmps + tolerance) {
    return {
      kind: 'over-current',
      happened: `${inAmps(highest)} in the coils; the bench's limit is ${inAmps(limits.coilAmps)}.`,
      toDo,
      heaterOff: false,
    }
  }
  const { on, commanded, changedAt } = view.outputs.coils
  const reached = view.at - changedAt >= settleSeconds
  const lowest = Math.min(...readings)
  if (
    on &&
    readings.length === 2 &&
    lowest > commanded + allowance(commanded, tolerance, limits.coilAmpsPerSecond, reached)
  ) {
    return {
      kind: 'over-current',
      happened: `${inAmps(highest)} in the coils, where ${inAmps(commanded)} was commanded.`,
      toDo,
      heaterOff: false,
    }
  }
  return null
}

function anodeCurrent(view: BenchView, { limits }: SafetyConfig): Fault | null {
  const amps = view.values.anodeAmps
  if (amps === null || amps <= limits.anodeAmps) return null
  return {
    kind: 'anode-current',
    happened: `${inMilliamps(amps)} anode current; the bench's limit is ${inMilliamps(limits.anodeAmps)}.`,
    toDo: 'Look for a discharge in the tube or a failing cathode; lower the voltage after the reset.',
    heaterOff: false,
  }
}

type Comparison = {
  what: string
  output: BenchView['outputs']['anode']
  supply: number | null
  meter: number | null
  tolerance: number
  perSecond: number
  offAbove: number
  inUnits: (value: number) => string
}

function readBack(view: BenchView, c: Comparison): Fault | null {
  const since = view.at - c.output.changedAt
  const fault = (happened: string): Fault => ({
    kind: 'read-back',
    happened,
    toDo: 'Check the supply, the meter and the leads between them, then reset.',
    heaterOff: false,
  })
  if (!c.output.on) {
    const left = Math.max(Math.abs(c.supply ?? 0), Math.abs(c.meter ?? 0))
    return since >= fallenSeconds && left > c.offAbove
      ? fault(`${c.what}: off commanded ${inSeconds(since)} ago, ${c.inUnits(left)} measured.`)
      : null
  }
  const reached = since >= settleSeconds
  const tolerance = c.tolerance + (reached ? 0 : c.perSecond * rampLagSeconds)
  if (c.supply !== null && c.meter !== null && Math.abs(Math.abs(c.supply) - Math.abs(c.meter)) > tolerance) {
    return fault(
      `${c.what}: the supply reports ${c.inUnits(c.supply)}, the meter ${c.inUnits(c.meter)}; ${c.inUnits(tolerance)} apart is allowed.`,
    )
  }
  for (const [who, value] of [
    ['supply', c.supply],
    ['meter', c.meter],
  ] as const) {
    if (reached && value !== null && Math.abs(Math.abs(value) - c.output.commanded) > c.tolerance) {
      return fault(
        `${c.what}: ${c.inUnits(c.output.commanded)} commanded, the ${who} reports ${c.inUnits(value)}; ${c.inUnits(c.tolerance)} apart is allowed.`,
      )
    }
  }
  return null
}

function anodeReadBack(view: BenchView, { limits }: SafetyConfig): Fault | null {
  return readBack(view, {
    what: 'Anode voltage',
    output: view.outputs.anode,
    supply: view.values.anodeSupplyVolts,
    meter: view.values.anodeVolts,
    tolerance: limits.readBack.anodeVolts,
    perSecond: limits.anodeVoltsPerSecond,
    offAbove: Math.max(dischargedVolts, limits.readBack.anodeVolts),
    inUnits: inVolts,
  })
}

function coilReadBack(view: BenchView, { limits }: SafetyConfig): Fault | null {
  return readBack(view, {
    what: 'Coil current',
    output: view.outputs.coils,
    supply: view.values.coilSupplyAmps,
    meter: view.values.coilAmps,
    tolerance: limits.readBack.coilAmps,
    perSecond: limits.coilAmpsPerSecond,
    offAbove: Math.max(0.05, limits.readBack.coilAmps),
    inUnits: inAmps,
  })
}

function staleChannel(view: BenchView): Fault | null {
  if (!anyOutputOn(view)) return null
  const stale = staleSignals(view, confirmSeconds['stale-channel'])
  if (stale.length === 0) return null
  return {
    kind: 'stale-channel',
    happened: `No reading of ${listed(stale.map((name) => channelWords[name]))} for ${inSeconds(confirmSeconds['stale-channel'])}.`,
    toDo: 'Check the instrument and its cable, wait until it reads again, then reset.',
    heaterOff: false,
  }
}

function heater(view: BenchView, { limits }: SafetyConfig, warmUp: WarmUp): Fault | null {
  const { heaterVolts, heaterAmps } = view.values
  const { on, changedAt } = view.outputs.heater
  if (!on || heaterVolts === null || heaterAmps === null) return null
  const { nominal, low, high } = limits.heaterVolts
  if (heaterVolts > nominal / 2 && heaterAmps < heaterOpenAmps) {
    return {
      kind: 'heater',
      happened: `The heater has ${inVolts(heaterVolts)} but carries ${inAmps(heaterAmps)}: its circuit is open.`,
      toDo: 'Make safe, check the heater leads and the tube, then reset.',
      heaterOff: true,
    }
  }
  const armed = warmUp.seenInBand || view.at - changedAt >= heaterStartSeconds
  if (armed && (heaterVolts < low || heaterVolts > high)) {
    return {
      kind: 'heater',
      happened: `The heater has ${inVolts(heaterVolts)}; its band is ${inVolts(low)} to ${inVolts(high)}.`,
      toDo: 'Check the heater supply, then reset.',
      heaterOff: heaterVolts > high,
    }
  }
  return null
}

function coilTemperature(view: BenchView, { limits }: SafetyConfig): Fault | null {
  const celsius = view.values.coilCelsius
  if (celsius === null || celsius <= limits.coilCelsius) return null
  return {
    kind: 'coil-temperature',
    happened: `The coils are at ${inCelsius(celsius)}; the bench's limit is ${inCelsius(limits.coilCelsius)}.`,
    toDo: 'Let the coils cool below the limit, then reset.',
    heaterOff: false,
  }
}
