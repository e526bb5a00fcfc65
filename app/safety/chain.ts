import { type Fault, faultsNow } from './faults.ts'
import type { Contact, ContactName, Trip } from './types.ts'
import {
  anyOutputOn,
  type BenchView,
  channelWords,
  heaterInBand,
  type SafetyConfig,
  staleSeconds,
  staleSignals,
} from './view.ts'
import { isWarm, type WarmUp } from './warm-up.ts'
import { inCelsius, inVolts, listed } from './words.ts'

type Said = { closed: boolean; measured: string; reason?: string }
const contact = (name: ContactName, said: Said): Contact => ({
  name,
  closed: said.closed,
  measured: said.measured,
  reason: said.closed ? null : (said.reason ?? null),
})

/**
 * The interlock chain in the order of its drawing. With the anode on, a contact whose fault is still being
 * confirmed stays closed until the trip, which takes the anode down in the same step; with it off a contact opens
 * at the first bad sample.
 */
export function interlockChain(view: BenchView, warmUp: WarmUp, trip: Trip | null): Contact[] {
  const { config } = view
  if (config === null) return uncommissionedChain(trip)
  const faults = faultsNow(view, warmUp)
  const holds = view.outputs.anode.on && trip === null
  return [
    contact('commissioned', { closed: true, measured: 'commissioned' }),
    eStop(view),
    enclosure(view),
    warmUpContact(view, warmUp, config),
    heater(view, warmUp, config, holds),
    coilTemperature(view, config, holds),
    signal(view, holds),
    readBack(faults, holds),
    contact('no-trip', {
      closed: trip === null,
      measured: trip === null ? 'none' : trip.kind,
      reason: trip === null ? undefined : `Tripped: ${trip.happened} ${trip.toDo}`,
    }),
    controls(view),
  ]
}

/** Whether every contact is closed: only then is the anode permitted. */
export const isAnodePermitted = (chain: readonly Contact[]): boolean => chain.every((link) => link.closed)

function uncommissionedChain(trip: Trip | null): Contact[] {
  const names: ContactName[] = [
    'e-stop',
    'enclosure',
    'warm-up',
    'heater',
    'coil-temperature',
    'signal',
    'read-back',
    'controls',
  ]
  const reason = 'Nothing is known of this until the bench is commissioned.'
  return [
    contact('commissioned', {
      closed: false,
      measured: 'not commissioned',
      reason:
        'This bench is not commissioned: ask a technician to enter its coils, tube, instruments and limits.',
    }),
    ...names.map((name) => contact(name, { closed: false, measured: 'unknown', reason })),
    contact('no-trip', { closed: trip === null, measured: trip?.kind ?? 'none', reason: trip?.toDo }),
  ]
}

function eStop(view: BenchView): Contact {
  if (view.interlock === null) return unknownSwitch('e-stop')
  return contact('e-stop', {
    closed: view.interlock.eStopOut,
    measured: view.interlock.eStopOut ? 'out' : 'pressed',
    reason: 'The emergency stop is pressed: find out why, then pull it out.',
  })
}

function enclosure(view: BenchView): Contact {
  if (view.interlock === null) return unknownSwitch('enclosure')
  return contact('enclosure', {
    closed: view.interlock.enclosureClosed,
    measured: view.interlock.enclosureClosed ? 'closed' : 'open',
    reason: 'The enclosure is open: close it.',
  })
}

const unknownSwitch = (name: 'e-stop' | 'enclosure'): Contact =>
  contact(name, {
    closed: false,
    measured: 'unknown',
    reason: 'The interlock unit has not answered: check its cable.',
  })

function warmUpContact(view: BenchView, warmUp: WarmUp, { limits }: SafetyConfig): Contact {
  const elapsed = Math.floor(Math.min(warmUp.elapsedSeconds, limits.warmUpSeconds))
  const left = Math.max(1, Math.ceil(limits.warmUpSeconds - warmUp.elapsedSeconds))
  return contact('warm-up', {
    closed: view.outputs.heater.on && isWarm(warmUp, limits),
    measured: `${elapsed} of ${limits.warmUpSeconds} s`,
    reason: view.outputs.heater.on
      ? `The heater is warming up: wait ${left} s more.`
      : 'The heater is off: switch it on and let it warm up.',
  })
}

function heater(view: BenchView, warmUp: WarmUp, { limits }: SafetyConfig, holds: boolean): Contact {
  const { low, high } = limits.heaterVolts
  const { heaterVolts } = view.values
  const inBand = heaterInBand(view.values, limits.heaterVolts)
  const reason = !view.outputs.heater.on
    ? 'The heater is off: switch it on.'
    : inBand === null
      ? 'The heater has no reading: check the supply.'
      : `The heater has ${inVolts(heaterVolts ?? 0)} and its band is ${inVolts(low)} to ${inVolts(high)} with a current: check the heater supply and leads.`
  return contact('heater', {
    closed: view.outputs.heater.on && (inBand === true || (holds && warmUp.seenInBand)),
    measured: !view.outputs.heater.on ? 'off' : heaterVolts === null ? 'no reading' : inVolts(heaterVolts),
    reason,
  })
}

function coilTemperature(view: BenchView, { limits }: SafetyConfig, holds: boolean): Contact {
  const celsius = view.values.coilCelsius
  return contact('coil-temperature', {
    closed: holds || (celsius !== null && celsius < limits.coilCelsius),
    measured: celsius === null ? 'no reading' : inCelsius(celsius),
    reason:
      celsius === null
        ? 'The coil temperature is not known: wait for the coil supply to answer.'
        : `The coils are at ${inCelsius(celsius)} and the limit is ${inCelsius(limits.coilCelsius)}: let them cool.`,
  })
}

function signal(view: BenchView, holds: boolean): Contact {
  if (view.lostLines.length > 0) {
    return contact('signal', {
      closed: false,
      measured: 'line lost',
      reason: `The line to the ${listed(view.lostLines)} is lost: check the cable and the instrument.`,
    })
  }
  if (!view.prepared) {
    return contact('signal', {
      closed: false,
      measured: 'connecting',
      reason: 'The outputs have not yet been read back as off: wait until the supply answers.',
    })
  }
  const stale = holds ? [] : staleSignals(view, staleSeconds)
  return contact('signal', {
    closed: stale.length === 0,
    measured: stale.length === 0 ? 'fresh' : 'stale',
    reason: `No fresh reading of ${listed(stale.map((name) => channelWords[name]))}: check the instrument.`,
  })
}

function readBack(faults: readonly Fault[], holds: boolean): Contact {
  const fault = holds ? undefined : faults.find(({ kind }) => kind === 'read-back')
  return contact('read-back', {
    closed: fault === undefined,
    measured: fault === undefined ? 'agrees' : 'disagrees',
    reason: fault === undefined ? undefined : `${fault.happened} ${fault.toDo}`,
  })
}

function controls(view: BenchView): Contact {
  if (view.holder === null) {
    return contact('controls', {
      closed: false,
      measured: 'nobody',
      reason: anyOutputOn(view)
        ? 'Nobody is at the controls: take the controls or make safe.'
        : 'Nobody is at the controls: take the controls.',
    })
  }
  return contact('controls', {
    closed: view.holder.acknowledged,
    measured: view.holder.name,
    reason: `${view.holder.name} has not acknowledged the cautions for this term: read and acknowledge them.`,
  })
}
