import type { BenchConfig } from '#app/protocol/bench-config.ts'
import { createInterlockUnit } from './instruments/interlock-unit.ts'
import { createMeter } from './instruments/meter.ts'
import type { OpenPort } from './instruments/open-port.ts'
import { interlockProfile, meterProfile, outputRange, supplyProfile } from './instruments/profiles.ts'
import { createSupply } from './instruments/supply.ts'
import type {
  Instrument,
  InterlockUnit,
  Meter,
  PortStatus,
  Supply,
  SupplyProtection,
} from './instruments/types.ts'

/** How long the supply holds its outputs without a word from the bridge. */
const watchdogSeconds = 1.2

/** The four instruments of a bench, and what their profiles can do. */
export type InstrumentSet = {
  supply: Supply
  anodeMeter: Meter
  coilMeter: Meter
  interlock: InterlockUnit
  ranges: { anodeVolts: number; coilAmps: number }
  protection: SupplyProtection
  all: readonly Instrument[]
}

export const instrumentWords: Record<string, string> = {
  supply: 'supply',
  'anode-meter': 'anode meter',
  'coil-meter': 'coil meter',
  interlock: 'interlock unit',
}

/** Throws a RangeError for a profile name that is none. */
export function createInstrumentSet(config: BenchConfig, openPort: OpenPort): InstrumentSet {
  const { supply, anodeMeter, coilMeter, interlock } = config.instruments
  const profile = supplyProfile(supply.profile)
  const { limits } = config
  const instruments = {
    supply: createSupply({
      name: 'supply',
      openPort,
      path: supply.path,
      profile,
      channels: supply.channels,
    }),
    anodeMeter: createMeter({
      name: 'anode-meter',
      openPort,
      path: anodeMeter.path,
      profile: meterProfile(anodeMeter.profile),
    }),
    coilMeter: createMeter({
      name: 'coil-meter',
      openPort,
      path: coilMeter.path,
      profile: meterProfile(coilMeter.profile),
    }),
    interlock: createInterlockUnit({
      name: 'interlock',
      openPort,
      path: interlock.path,
      profile: interlockProfile(interlock.profile),
    }),
  }
  return {
    ...instruments,
    ranges: {
      anodeVolts: outputRange(profile, 'anode', 'volts').maximum,
      coilAmps: outputRange(profile, 'coils', 'amps').maximum,
    },
    // Above the bridge's own limits, so that it is the bridge which trips and says why while it is there.
    protection: {
      anodeVolts: limits.anodeVolts * 1.1 + limits.readBack.anodeVolts,
      anodeAmps: limits.anodeAmps * 4,
      coilAmps: limits.coilAmps * 1.1 + limits.readBack.coilAmps,
      heaterVolts: limits.heaterVolts.high * 1.1,
      watchdogSeconds,
    },
    all: Object.values(instruments),
  }
}

export const portStatuses = (set: InstrumentSet | null): Record<string, PortStatus> =>
  Object.fromEntries((set?.all ?? []).map(({ name, status }) => [name, status]))

/** Names, in words, of the instruments whose line is not open. */
export const lostLines = (set: InstrumentSet | null): string[] =>
  (set?.all ?? []).filter(({ status }) => status !== 'open').map(({ name }) => instrumentWords[name] ?? name)
