/** The words that the bridge decides with and the pages show. Pure: nothing here knows of sockets, ports or rows. */

export const outputs = ['heater', 'anode', 'coils'] as const
export type Output = (typeof outputs)[number]

/** What a bench measures. Supply read-backs stand beside the independent meters of anode voltage and coil current. */
export const channels = [
  'heaterVolts',
  'heaterAmps',
  'anodeVolts',
  'anodeSupplyVolts',
  'anodeAmps',
  'coilAmps',
  'coilSupplyAmps',
  'coilVolts',
  'coilCelsius',
] as const
export type Channel = (typeof channels)[number]

/** One value a channel at one moment; null is no reading, never a zero. */
export type ChannelValues = Record<Channel, number | null>

export type BenchPhase = 'unconfigured' | 'lost' | 'off' | 'warming' | 'ready' | 'live' | 'tripped'

export type Polarity = 1 | -1

/** Limits and times of a bench, set at commissioning. Rates are per second. */
export type BenchLimits = {
  anodeVolts: number
  anodeAmps: number
  coilAmps: number
  coilCelsius: number
  heaterVolts: { nominal: number; low: number; high: number }
  warmUpSeconds: number
  anodeVoltsPerSecond: number
  coilAmpsPerSecond: number
  /** Largest disagreement of setpoint, supply read-back and meter that is not a fault. */
  readBack: { anodeVolts: number; coilAmps: number }
  deadManMinutes: number
  /** Whether a trip takes the heater down as well. */
  heaterOffOnTrip: boolean
  /** Whether a student at the controls may reset a trip of this bench. */
  studentMayReset: boolean
}

export const tripKinds = [
  'e-stop',
  'enclosure',
  'over-voltage',
  'over-current',
  'anode-current',
  'read-back',
  'stale-channel',
  'heater',
  'coil-temperature',
  'lost-line',
  'dead-man',
] as const
export type TripKind = (typeof tripKinds)[number]

/** Stated time, in seconds, from the fault to the trip. The dead-man has its own; a lost line is the supply's watchdog. */
export const detectionSeconds: Record<Exclude<TripKind, 'dead-man'>, number> = {
  'e-stop': 0.2,
  enclosure: 0.2,
  'over-voltage': 0.3,
  'over-current': 0.3,
  'anode-current': 0.3,
  'read-back': 1.5,
  'stale-channel': 1.5,
  heater: 1.5,
  'coil-temperature': 2,
  'lost-line': 2,
}

/** The time within which the anode terminal is below 5 V after a detection time has passed. */
export const fallSeconds = 0.7

/** IEC 61010-1 (third edition), 6.3.1, dry locations: a d.c. voltage above this is hazardous live. */
export const hazardousVolts = 60

export const contactNames = [
  'commissioned',
  'e-stop',
  'enclosure',
  'warm-up',
  'heater',
  'coil-temperature',
  'signal',
  'read-back',
  'no-trip',
  'controls',
] as const
export type ContactName = (typeof contactNames)[number]

/** One make contact of the interlock chain, drawn in series before the anode. */
export type Contact = {
  name: ContactName
  closed: boolean
  /** What was measured, in words short enough for the drawing: '31 °C', 'closed', '4 of 10 s'. */
  measured: string
  /** One sentence when open: what stops the anode and what to do. Null when closed. */
  reason: string | null
}

export type Trip = {
  kind: TripKind
  /** Seconds of wall-clock time since 1970. */
  at: number
  /** What happened, with the measured value and the limit: 'Enclosure opened.' */
  happened: string
  /** What to do now: 'Close the enclosure, then reset.' */
  toDo: string
}

export const roles = ['technician', 'instructor', 'student', 'guest'] as const
export type Role = (typeof roles)[number]

/** The person who asks, as the app vouches for them in a signed command. */
export type Actor = {
  personId: string
  name: string
  role: Role
  /** Whether this person has acknowledged the cautions for this term. */
  acknowledged: boolean
  /** The socket page that speaks for this person, when known. */
  pageId?: string
}

export const refusalCodes = [
  'not-configured',
  'line-lost',
  'not-a-number',
  'below-zero',
  'above-limit',
  'above-range',
  'below-range',
  'not-at-the-controls',
  'controls-taken',
  'not-acknowledged',
  'not-permitted',
  'tripped',
  'not-tripped',
  'fault-present',
  'heater-off',
  'not-warmed-up',
  'heater-out-of-band',
  'enclosure-open',
  'e-stop-in',
  'coil-temperature',
  'signal-stale',
  'read-back',
  'polarity-fixed',
  'polarity-changing',
  'not-settled',
  'busy',
  'instrument-refused',
] as const
export type RefusalCode = (typeof refusalCodes)[number]

/** Why a command was not carried out. The sentence names the limit, whose it is, and by how much. */
export type Refusal = { code: RefusalCode; sentence: string }
