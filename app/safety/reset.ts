import type { Actor, Refusal, Trip, TripKind } from './types.ts'
import {
  type BenchView,
  channelWords,
  dischargedVolts,
  heaterInBand,
  heaterOpenAmps,
  staleSeconds,
  staleSignals,
} from './view.ts'
import type { WarmUp } from './warm-up.ts'
import { inAmps, inCelsius, inMilliamps, inVolts, listed } from './words.ts'

/** Only a technician resets these: they may mean a supply that fails, or damage. */
export const technicianOnly: readonly TripKind[] = ['over-voltage', 'coil-temperature']

/** Read at the very moment of a reset, whatever tripped. */
const needed = ['anodeVolts', 'anodeSupplyVolts', 'anodeAmps', 'coilAmps', 'coilSupplyAmps'] as const

/** Why this person cannot reset the trip now; empty when they can. A reset switches nothing on again. */
export function refusalsToReset(view: BenchView, warmUp: WarmUp, trip: Trip | null, actor: Actor): Refusal[] {
  if (trip === null) return [{ code: 'not-tripped', sentence: 'There is no trip to reset on this bench.' }]
  const refusals = refusalsByRole(view, trip, actor)
  const standing = standingFault(view, warmUp, trip.kind)
  if (standing !== null) refusals.push({ code: 'fault-present', sentence: standing })
  return refusals
}

function refusalsByRole(view: BenchView, trip: Trip, actor: Actor): Refusal[] {
  if (actor.role === 'technician') return []
  if (technicianOnly.includes(trip.kind)) {
    return [{ code: 'not-permitted', sentence: `A technician must reset a trip of the kind ${trip.kind}.` }]
  }
  if (actor.role === 'instructor') return []
  if (actor.role === 'guest') {
    return [{ code: 'not-permitted', sentence: 'A guest of a demonstration may watch only.' }]
  }
  const refusals: Refusal[] = []
  if (view.config?.limits.studentMayReset !== true) {
    refusals.push({
      code: 'not-permitted',
      sentence: 'This bench does not let students reset a trip: ask an instructor or a technician.',
    })
  }
  if (view.holder?.personId !== actor.personId) {
    refusals.push({
      code: 'not-at-the-controls',
      sentence: 'Take the controls of this bench before you reset its trip.',
    })
  }
  return refusals
}

/** The fault behind a trip as it still stands, in one sentence with what to do; null when it is gone. */
function standingFault(view: BenchView, warmUp: WarmUp, kind: TripKind): string | null {
  if (view.config === null) return 'The bench is not commissioned.'
  if (view.lostLines.length > 0) {
    return `The line to the ${listed(view.lostLines)} is still lost: check the cable and the instrument.`
  }
  if (!view.prepared) return 'The outputs have not been read back as off yet: wait until the supply answers.'
  const stale = staleSignals(view, staleSeconds)
  if (stale.length > 0) {
    return `There is still no fresh reading of ${listed(stale.map((name) => channelWords[name]))}: check the instrument.`
  }
  return standingReading(view, kind) ?? standingCause(view, warmUp, kind)
}

/** What must hold before any trip is reset: the anode has been read as discharged. No reading is no zero. */
function standingReading({ values }: BenchView, kind: TripKind): string | null {
  const missing = needed.filter((channel) => values[channel] === null)
  if (values.anodeVolts === null || values.anodeSupplyVolts === null || missing.length > 0) {
    return `There is still no reading of ${listed(missing.map((name) => channelWords[name]))} at this moment: wait for the next one.`
  }
  const highest = Math.max(values.anodeVolts, values.anodeSupplyVolts)
  if (highest > dischargedVolts) {
    return `${inVolts(highest)} is still measured at the anode: treat the tube as live, wait until it is discharged.`
  }
  const coilAmps = highestCoilAmps(values)
  if (kind === 'read-back' && coilAmps > 0.1) {
    return `${inAmps(coilAmps)} is still measured in the coils: check the coil supply.`
  }
  return null
}

const highestCoilAmps = ({ coilAmps, coilSupplyAmps }: BenchView['values']): number =>
  Math.max(Math.abs(coilAmps ?? 0), Math.abs(coilSupplyAmps ?? 0))

function standingCause(view: BenchView, warmUp: WarmUp, kind: TripKind): string | null {
  const { values, config, interlock, outputs } = view
  if (config === null) return null
  const { limits } = config
  switch (kind) {
    case 'e-stop':
      return interlock?.eStopOut === true ? null : 'The emergency stop is still pressed: pull it out.'
    case 'enclosure':
      return interlock?.enclosureClosed === true ? null : 'The enclosure is still open: close it.'
    case 'over-current': {
      const amps = highestCoilAmps(values)
      return amps > limits.coilAmps ? `${inAmps(amps)} is still measured in the coils.` : null
    }
    case 'anode-current': {
      const amps = values.anodeAmps ?? 0
      return amps > limits.anodeAmps ? `${inMilliamps(amps)} anode current is still measured.` : null
    }
    case 'coil-temperature': {
      const celsius = values.coilCelsius
      return celsius !== null && celsius < limits.coilCelsius
        ? null
        : `The coils are still at ${celsius === null ? 'an unknown temperature' : inCelsius(celsius)}; the limit is ${inCelsius(limits.coilCelsius)}: let them cool.`
    }
    case 'heater': {
      if (!outputs.heater.on || !(warmUp.seenInBand || (values.heaterAmps ?? 0) < heaterOpenAmps)) return null
      return heaterInBand(values, limits.heaterVolts) === true
        ? null
        : `The heater is still out of its band: ${inVolts(values.heaterVolts ?? 0)}, ${inAmps(values.heaterAmps ?? 0)}.`
    }
    default:
      return null
  }
}
