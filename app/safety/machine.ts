import { type Fault, type FaultKind, type FaultTimes, faultsNow, stepFaults } from './faults.ts'
import { technicianOnly } from './reset.ts'
import type { BenchPhase, Trip, TripKind } from './types.ts'
import { anyOutputOn, type BenchView, heaterInBand } from './view.ts'
import { coldHeater, isWarm, stepWarmUp, type WarmUp } from './warm-up.ts'
import { anodeKnowledge, inCelsius, inSeconds } from './words.ts'

/** The state machine of one bench: what it remembers from one view to the next. */
export type Machine = {
  phase: BenchPhase
  /** Monotonic time of the last change of phase. */
  since: number
  warmUp: WarmUp
  faultTimes: FaultTimes
  /** Faults that have already taken the outputs down, so that each acts once. */
  acted: FaultKind[]
  trip: Trip | null
  interlock: BenchView['interlock']
}

export const startMachine = (at: number): Machine => ({
  phase: 'lost',
  since: at,
  warmUp: coldHeater,
  faultTimes: {},
  acted: [],
  trip: null,
  interlock: null,
})

/** What a step asks the bench to do or to tell. A shutdown takes anode and coils down, the heater if it says so. */
export type Happening =
  | { kind: 'trip'; trip: Trip }
  | { kind: 'shutdown'; cause: string; heater: boolean }
  | { kind: 'interlock'; sentence: string; contact: 'e-stop' | 'enclosure'; closed: boolean }
  | { kind: 'phase'; from: BenchPhase; to: BenchPhase }

/**
 * One step of the machine: judges the view, trips on a fault that has stood for its time, moves the phase. Call it
 * on every sample, on every reading of the interlock unit, and on a timer, so that silence is judged as well.
 * `wallAt` is the same moment in seconds since 1970.
 */
export function advance(
  machine: Machine,
  view: BenchView,
  wallAt: number,
): { machine: Machine; happenings: Happening[] } {
  const happenings: Happening[] = []
  const warmUp =
    view.config === null
      ? coldHeater
      : stepWarmUp(machine.warmUp, {
          at: view.at,
          on: view.outputs.heater.on,
          values: view.values,
          limits: view.config.limits,
        })
  const { times, confirmed } = stepFaults(machine.faultTimes, faultsNow(view, warmUp), view.at)
  const fresh = confirmed.filter(({ kind }) => !machine.acted.includes(kind))
  let { trip } = machine
  for (const fault of fresh) {
    if (trip === null) {
      trip = tripOf(fault, wallAt)
      happenings.push({ kind: 'trip', trip })
    } else if (technicianOnly.includes(fault.kind) && !technicianOnly.includes(trip.kind)) {
      // Whoever may reset the first trip must not reset this one with it.
      trip = { ...tripOf(fault, wallAt), happened: `${fault.happened} Before that: ${trip.happened}` }
      happenings.push({ kind: 'trip', trip })
    } else if (!anyOutputOn(view)) {
      continue
    }
    happenings.push({ kind: 'shutdown', cause: fault.happened, heater: heaterFalls(view, fault) })
  }
  happenings.push(...interlockChanges(machine.interlock, view.interlock))
  const phase = phaseOf(view, warmUp, trip)
  if (phase !== machine.phase) happenings.push({ kind: 'phase', from: machine.phase, to: phase })
  return {
    machine: {
      phase,
      since: phase === machine.phase ? machine.since : view.at,
      warmUp,
      faultTimes: times,
      acted: confirmed.map(({ kind }) => kind),
      trip,
      interlock: view.interlock ?? machine.interlock,
    },
    happenings,
  }
}

const tripOf = (fault: Fault, at: number): Trip => ({
  kind: fault.kind,
  at,
  happened: fault.happened,
  toDo: fault.toDo,
})

const heaterFalls = (view: BenchView, fault: Fault): boolean =>
  fault.heaterOff || view.config?.limits.heaterOffOnTrip !== false

/** The dead-man latches when an output was on; with everything off the controls are only given free. */
export function tripDeadMan(
  machine: Machine,
  seen: { wallAt: number; name: string; lost: 'page' | 'input'; minutes: number },
): { machine: Machine; trip: Trip } {
  const kind: TripKind = 'dead-man'
  const happened =
    seen.lost === 'page'
      ? `The page of ${seen.name}, who was at the controls, is gone.`
      : `${seen.name}, who was at the controls, gave no sign for ${seen.minutes} min.`
  const trip: Trip = {
    kind,
    at: seen.wallAt,
    happened,
    toDo: 'Take the controls and see that all is in order, then reset.',
  }
  return { machine: { ...machine, trip: machine.trip ?? trip }, trip }
}

/** The machine with its trip reset. `refusalsToReset` says whether it may be. */
export const resetTrip = (machine: Machine): Machine => ({
  ...machine,
  trip: null,
  faultTimes: {},
  acted: [],
})

export function phaseOf(view: BenchView, warmUp: WarmUp, trip: Trip | null): BenchPhase {
  if (view.config === null) return 'unconfigured'
  if (view.lostLines.length > 0 || !view.prepared) return 'lost'
  if (trip !== null) return 'tripped'
  if (!view.outputs.heater.on) return 'off'
  if (!isWarm(warmUp, view.config.limits)) return 'warming'
  return view.outputs.anode.on ? 'live' : 'ready'
}

function interlockChanges(before: BenchView['interlock'], now: BenchView['interlock']): Happening[] {
  const changes: Happening[] = []
  if (now === null) return changes
  if (before?.eStopOut !== now.eStopOut && (before !== null || !now.eStopOut)) {
    changes.push({
      kind: 'interlock',
      contact: 'e-stop',
      closed: now.eStopOut,
      sentence: now.eStopOut ? 'The emergency stop was pulled out.' : 'The emergency stop is pressed.',
    })
  }
  if (before?.enclosureClosed !== now.enclosureClosed && (before !== null || !now.enclosureClosed)) {
    changes.push({
      kind: 'interlock',
      contact: 'enclosure',
      closed: now.enclosureClosed,
      sentence: now.enclosureClosed ? 'The enclosure was closed.' : 'The enclosure is open.',
    })
  }
  return changes
}

/** How close to its limit the coils' temperature is warned of. */
const warningKelvin = 5

/** What deserves a look before it becomes a trip, a sentence each. */
export function warningsOf(
  machine: Machine,
  view: BenchView,
  anodeMeasured: { volts: number; at: number } | null,
): string[] {
  const warnings: string[] = []
  const { config, values } = view
  if (config === null) return warnings
  const { limits } = config
  if (machine.phase === 'lost') {
    warnings.push(
      `Not every instrument answers: treat the tube as live. Anode: ${anodeKnowledge(anodeMeasured, view.at)}.`,
    )
  }
  const left = values.coilCelsius === null ? null : limits.coilCelsius - values.coilCelsius
  if (left !== null && left <= warningKelvin && values.coilCelsius !== null) {
    warnings.push(
      `The coils are at ${inCelsius(values.coilCelsius)}; at ${inCelsius(limits.coilCelsius)} the bench trips: lower the current.`,
    )
  }
  if (machine.warmUp.seenInBand && heaterInBand(values, limits.heaterVolts) === false) {
    const since = view.at - (machine.warmUp.outSince ?? view.at)
    warnings.push(`The heater has been out of its band for ${inSeconds(since)}.`)
  }
  return warnings
}
