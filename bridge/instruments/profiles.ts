import type { Output } from '#app/safety/types.ts'
import type { SerialSettings } from './open-port.ts'

/** Span and last digit of one quantity of an instrument, in its unit. */
export type Range = { maximum: number; resolution: number }

type Timing = {
  /** Time limit of one answer. */
  limitSeconds: number
  /** Time after a change until a reading shows it. */
  settlingSeconds: number
}

type OutputProfile = {
  channel: number
  /** The quantity that a bench sets; the other one is kept at its maximum, as a compliance. */
  regulates: 'volts' | 'amps'
  volts: Range
  amps: Range
}

export type SupplyProfile = {
  kind: 'supply'
  serial: SerialSettings
  timing: Timing
  outputs: Record<Output, OutputProfile>
  /** Highest level of the supply's own protection, as a multiple of the range. */
  protectionHeadroom: number
  commands: {
    volts: string
    amps: string
    voltsProtection: string
    ampsProtection: string
    clearProtection: string
    output: string
    polarity: string
    measureVolts: string
    measureAmps: string
    /** An extension of the instrument's own, in no standard: seconds without a message until all outputs go off. */
    watchdogExtension: string | null
  }
}

export type MeterProfile = {
  kind: 'volt-meter' | 'ampere-meter'
  serial: SerialSettings
  timing: Timing
  range: Range
  measure: string
}

export type InterlockProfile = {
  kind: 'interlock'
  serial: SerialSettings
  timing: Timing
  /** Asks for contacts 1 (e-stop out) and 2 (enclosure closed); 1 is a closed contact. */
  state: string
}

const serial: SerialSettings = { baudRate: 115_200, dataBits: 8, parity: 'none', stopBits: 1 }
const limitSeconds = 0.25

const supplyProfiles: Readonly<Record<string, SupplyProfile>> = {
  'scpi-triple-supply': {
    kind: 'supply',
    serial,
    timing: { limitSeconds, settlingSeconds: 0.1 },
    outputs: {
      heater: {
        channel: 1,
        regulates: 'volts',
        volts: { maximum: 8, resolution: 0.001 },
        amps: { maximum: 2, resolution: 0.001 },
      },
      anode: {
        channel: 2,
        regulates: 'volts',
        volts: { maximum: 350, resolution: 0.01 },
        amps: { maximum: 0.02, resolution: 0.000_01 },
      },
      coils: {
        channel: 3,
        regulates: 'amps',
        volts: { maximum: 30, resolution: 0.001 },
        amps: { maximum: 3.5, resolution: 0.0001 },
      },
    },
    protectionHeadroom: 1.1,
    commands: {
      volts: 'VOLT',
      amps: 'CURR',
      voltsProtection: 'VOLT:PROT',
      ampsProtection: 'CURR:PROT',
      clearProtection: 'OUTP:PROT:CLE',
      output: 'OUTP',
      polarity: 'OUTP:POL',
      measureVolts: 'MEAS:VOLT?',
      measureAmps: 'MEAS:CURR?',
      watchdogExtension: 'LINK:TIM',
    },
  },
}

const meterProfiles: Readonly<Record<string, MeterProfile>> = {
  'scpi-volt-meter': {
    kind: 'volt-meter',
    serial,
    timing: { limitSeconds, settlingSeconds: 0.2 },
    range: { maximum: 600, resolution: 0.01 },
    measure: 'MEAS:VOLT:DC?',
  },
  'scpi-ampere-meter': {
    kind: 'ampere-meter',
    serial,
    timing: { limitSeconds, settlingSeconds: 0.2 },
    range: { maximum: 5, resolution: 0.0001 },
    measure: 'MEAS:CURR:DC?',
  },
}

const interlockProfiles: Readonly<Record<string, InterlockProfile>> = {
  'scpi-interlock': {
    kind: 'interlock',
    serial,
    timing: { limitSeconds, settlingSeconds: 0 },
    state: 'INT:STAT? (@1,2)',
  },
}

function find<T>(profiles: Readonly<Record<string, T>>, name: string): T {
  const profile = Object.hasOwn(profiles, name) ? profiles[name] : undefined
  if (!profile)
    throw new RangeError(`No instrument profile '${name}'; there is ${Object.keys(profiles).join(', ')}`)
  return profile
}

/** Throws a RangeError for a name that is none; so do the other two. */
export const supplyProfile = (name: string): SupplyProfile => find(supplyProfiles, name)
export const meterProfile = (name: string): MeterProfile => find(meterProfiles, name)
export const interlockProfile = (name: string): InterlockProfile => find(interlockProfiles, name)

/** What one output of a supply can be set to: zero to `maximum`, in volts or amperes. */
export function outputRange(profile: SupplyProfile, output: Output, quantity: 'volts' | 'amps'): Range {
  return profile.outputs[output][quantity]
}
