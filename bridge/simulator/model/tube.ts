const roomKelvin = 294
const hotKelvin = 1050
const hotOhms = 6.3
const hotWatts = 6.3
const heatCapacityJoulesPerKelvin = 0.04
/** Resistance of tungsten rises a little faster than its temperature. */
const resistancePower = 1.2
const perveance = 0.5e-6
const hotSaturationAmps = 0.02
const workFunctionKelvin = 1.3 / 8.617e-5

/** Heater and cathode as one body that radiates. */
export class Filament {
  kelvin = roomKelvin

  get ohms(): number {
    return hotOhms * (this.kelvin / hotKelvin) ** resistancePower
  }

  step(watts: number, seconds: number): void {
    const room = roomKelvin ** 4
    const radiated = (hotWatts * (this.kelvin ** 4 - room)) / (hotKelvin ** 4 - room)
    this.kelvin += ((watts - radiated) * seconds) / heatCapacityJoulesPerKelvin
  }
}

/**
 * Anode current: limited by space charge (Child-Langmuir, V^(3/2)) at a hot cathode and by emission (Richardson) at
 * a cool one, with a smooth passage between them.
 */
export function anodeCurrentAmps(volts: number, cathodeKelvin: number): number {
  if (volts <= 0) return 0
  const relative = cathodeKelvin / hotKelvin
  const saturation =
    hotSaturationAmps *
    relative ** 2 *
    Math.exp(workFunctionKelvin / hotKelvin - workFunctionKelvin / cathodeKelvin)
  const spaceCharge = perveance * volts * Math.sqrt(volts)
  return (spaceCharge * saturation) / Math.hypot(spaceCharge, saturation)
}

/** Voltage at which the anode takes a given current; `mostVolts` when it never does. */
export function voltsAtCurrent(amps: number, cathodeKelvin: number, mostVolts: number): number {
  if (anodeCurrentAmps(mostVolts, cathodeKelvin) <= amps) return mostVolts
  let low = 0
  let high = mostVolts
  for (let step = 0; step < 40; step++) {
    const middle = (low + high) / 2
    if (anodeCurrentAmps(middle, cathodeKelvin) > amps) high = middle
    else low = middle
  }
  return low
}

/** How bright the beam glows, 0 to 1: it needs electrons enough, fast enough to make the gas shine. */
export function glowBrightness(volts: number, amps: number): number {
  const excitation = 1 - Math.exp(-((volts / 60) ** 2))
  return excitation * (1 - Math.exp(-amps / 0.0008))
}
