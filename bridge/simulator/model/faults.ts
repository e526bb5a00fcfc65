export const faultNames = [
  'over-voltage',
  'over-current',
  'anode-discharge',
  'heater-open',
  'heater-sag',
  'read-back',
  'coil-hot',
  'meter-frozen',
] as const
export type FaultName = (typeof faultNames)[number]

/** A factor, amperes, volts or degrees Celsius, as the fault's name says; where a fault has no value, 1. */
export const faultDefaults: Record<FaultName, number> = {
  'over-voltage': 1.15,
  'over-current': 1.15,
  'anode-discharge': 0.015,
  'heater-open': 1,
  'heater-sag': 4.5,
  'read-back': 0.9,
  'coil-hot': 80,
  'meter-frozen': 1,
}
