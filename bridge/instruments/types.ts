import type { Output, Polarity } from '#app/safety/types.ts'

export type PortStatus = 'closed' | 'opening' | 'open' | 'lost'

/** What a line driver knows of itself, common to every kind of instrument. */
export type Instrument = {
  readonly name: string
  readonly status: PortStatus
  /** Called on every change of status, with a reason in words when the line was lost. */
  onStatus(listener: (status: PortStatus, reason: string | null) => void): void
  /** Opens the port and keeps it open: a lost line is retried with back-off until `close`. Never throws. */
  open(): void
  close(): Promise<void>
}

export type SupplyReading = Record<Output, { volts: number | null; amps: number | null }>

/** Limits that the supply itself is told to hold, so that they stand with the bridge gone. */
export type SupplyProtection = {
  anodeVolts: number
  anodeAmps: number
  coilAmps: number
  heaterVolts: number
  watchdogSeconds: number
}

/**
 * A supply of three outputs. Every set is followed by SYST:ERR?; a set that the instrument refused rejects with
 * `InstrumentRefusedError` (its error number and text), one that was not answered in time with `LineError`.
 * `urgent` goes ahead of everything queued.
 */
export type Supply = Instrument & {
  /** Commands all outputs off and to zero, reads them back as off, then sets protection and watchdog. */
  prepare(protection: SupplyProtection): Promise<void>
  setVolts(output: Output, volts: number, options?: { urgent?: boolean }): Promise<void>
  setAmps(output: Output, amps: number, options?: { urgent?: boolean }): Promise<void>
  switchOutput(output: Output, on: boolean, options?: { urgent?: boolean }): Promise<void>
  setPolarity(polarity: Polarity): Promise<void>
  /** Measures all outputs and feeds the watchdog. An answer that cannot be parsed is null, never a number. */
  measure(): Promise<SupplyReading>
  isOn(output: Output): Promise<boolean | null>
}

export type Meter = Instrument & { measure(): Promise<number | null> }

export type InterlockReading = { eStopOut: boolean; enclosureClosed: boolean }
export type InterlockUnit = Instrument & { measure(): Promise<InterlockReading | null> }
