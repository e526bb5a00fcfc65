import type { BenchLimits, Channel, ChannelValues, Output, Role } from './types.ts'

/** What the machine has to know of a bench's commissioning. `ranges` are the upper ends of the supply itself. */
export type SafetyConfig = {
  limits: BenchLimits
  ranges: { anodeVolts: number; coilAmps: number }
  coilsReversible: boolean
}

/** An output as commanded. `changedAt` is when `on` or `commanded` last changed. */
export type OutputView = { on: boolean; asked: number; commanded: number; changedAt: number }

/** The one person who may change setpoints now. */
export type ControlsHolder = {
  personId: string
  name: string
  role: Role
  acknowledged: boolean
  since: number
}

/**
 * All that a bench knows at one moment; the machine decides from this and from nothing else. Times are seconds of
 * one monotonic clock. `values` is the newest sample, null where the instrument gave no reading.
 */
export type BenchView = {
  at: number
  config: SafetyConfig | null
  /** Names of the instruments whose line is not open. */
  lostLines: readonly string[]
  /** Whether every output has been commanded off and read back as off since the supply's line was opened. */
  prepared: boolean
  values: ChannelValues
  lastGoodAt: Readonly<Record<Channel, number | null>>
  interlock: { eStopOut: boolean; enclosureClosed: boolean } | null
  interlockAt: number | null
  outputs: Readonly<Record<Output, OutputView>>
  polarityChanging: boolean
  holder: ControlsHolder | null
}

/** A live channel without a reading for this long no longer permits the anode. */
export const staleSeconds = 1

/** Below this a heater that has its voltage carries no current: its circuit is open. */
export const heaterOpenAmps = 0.05

/** Below this the anode terminal counts as discharged. */
export const dischargedVolts = 5

/** Channels whose last reading is older than `seconds`, and the interlock unit as 'interlock'. */
export function staleSignals(view: BenchView, seconds: number): (Channel | 'interlock')[] {
  const stale: (Channel | 'interlock')[] = []
  for (const [channel, at] of Object.entries(view.lastGoodAt) as [Channel, number | null][]) {
    if (at === null || view.at - at > seconds) stale.push(channel)
  }
  if (view.interlockAt === null || view.at - view.interlockAt > seconds) stale.push('interlock')
  return stale
}

export const anyOutputOn = (view: BenchView): boolean =>
  view.outputs.heater.on || view.outputs.anode.on || view.outputs.coils.on

/** Whether the heater is inside its band and carries current; null without a reading. */
export function heaterInBand(values: ChannelValues, band: BenchLimits['heaterVolts']): boolean | null {
  if (values.heaterVolts === null || values.heaterAmps === null) return null
  return (
    values.heaterVolts >= band.low && values.heaterVolts <= band.high && values.heaterAmps >= heaterOpenAmps
  )
}

export const channelWords: Record<Channel | 'interlock', string> = {
  heaterVolts: 'heater voltage',
  heaterAmps: 'heater current',
  anodeVolts: 'anode voltage (meter)',
  anodeSupplyVolts: 'anode voltage (supply)',
  anodeAmps: 'anode current',
  coilAmps: 'coil current (meter)',
  coilSupplyAmps: 'coil current (supply)',
  coilVolts: 'coil voltage',
  coilCelsius: 'coil temperature',
  interlock: 'interlock unit',
}
