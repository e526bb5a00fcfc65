import { advanceCoilTemperature, coilTemperatureCelsius } from '#app/physics/coil-heating.ts'
import type { BenchConfig } from '#app/protocol/bench-config.ts'

/** Below this the resistance cannot be told from volts and amperes, and the cooling model carries on. */
const leastAmps = 0.1
/** The reading follows the resistance with this time constant, which takes the noise of small currents away. */
const smoothingSeconds = 0.4
const longestStepSeconds = 5

type Celsius = number

/**
 * Mean temperature of the coils from the coil supply's own volts and amperes against the resistance at commissioning.
 * With almost no current it is carried on by the cooling model; without a reading of the supply it is null.
 */
export class CoilThermometer {
  readonly #config: Pick<BenchConfig, 'coilResistance' | 'coilThermal'>
  #celsius: Celsius
  #at: number | null = null
  #isMeasured = false

  constructor(config: Pick<BenchConfig, 'coilResistance' | 'coilThermal'>) {
    this.#config = config
    this.#celsius = config.coilThermal.ambientCelsius
  }

  /** Whether the last value was measured, not carried on. */
  get isMeasured(): boolean {
    return this.#isMeasured
  }

  read(at: number, volts: number | null, amps: number | null): Celsius | null {
    if (volts === null || amps === null) return null
    const elapsed = this.#at === null ? 0 : Math.min(longestStepSeconds, Math.max(0, at - this.#at))
    this.#at = at
    if (Math.abs(amps) < leastAmps || Math.abs(volts) < 1e-6) {
      this.#isMeasured = false
      this.#celsius = advanceCoilTemperature({
        ...this.#config.coilThermal,
        temperatureCelsius: this.#celsius,
        powerWatts: Math.abs(volts * amps),
        durationSeconds: elapsed,
      })
      return this.#celsius
    }
    const measured = coilTemperatureCelsius({
      resistanceOhms: Math.abs(volts / amps),
      referenceOhms: this.#config.coilResistance.ohms,
      referenceCelsius: this.#config.coilResistance.celsius,
    })
    const share = this.#isMeasured ? 1 - Math.exp(-elapsed / smoothingSeconds) : 1
    this.#isMeasured = true
    this.#celsius += share * (measured - this.#celsius)
    return this.#celsius
  }
}
