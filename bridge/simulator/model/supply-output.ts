import type { Output, Polarity } from '#app/safety/types.ts'
import type { OutputScenario } from '../scenario.ts'
import { Random } from './random.ts'
import { Reading } from './reading.ts'

export type ProtectionTrip = 'over-voltage' | 'over-current'

const headroom = 1.1
const overVoltageSeconds = 0.01
const overCurrentSeconds = 0.2
const driftTimeSeconds = 120

/** The settings of one output, its own protection and its slow drift. What it drives is the bench's affair. */
export class SupplyOutput {
  readonly name: Output
  readonly scenario: OutputScenario
  readonly setVolts: Reading
  readonly setAmps: Reading
  readonly readVolts: Reading
  readonly readAmps: Reading
  volts = 0
  amps = 0
  overVolts = 0
  overAmps = 0
  isOn = false
  polarity: Polarity = 1
  trip: ProtectionTrip | null = null
  drift = 0
  readonly #driftRandom: Random
  #overVoltsFor = 0
  #overAmpsFor = 0

  constructor(name: Output, scenario: OutputScenario, seed: number) {
    this.name = name
    this.scenario = scenario
    const random = (use: string) => new Random(seed, `${name} ${use}`)
    this.setVolts = new Reading(scenario.setVolts, random('set volts'))
    this.setAmps = new Reading(scenario.setAmps, random('set amps'))
    this.readVolts = new Reading(scenario.readVolts, random('read volts'))
    this.readAmps = new Reading(scenario.readAmps, random('read amps'))
    this.#driftRandom = random('drift')
    this.reset()
  }

  /** Off, the regulated quantity at zero, the other one and the protection at their most. */
  reset(): void {
    this.volts = this.#regulatesAmps ? this.scenario.voltsRange : 0
    this.amps = this.#regulatesAmps ? 0 : this.scenario.ampsRange
    this.overVolts = this.mostOverVolts
    this.overAmps = this.mostOverAmps
    this.isOn = false
    this.polarity = 1
    this.clearTrip()
  }

  get mostOverVolts(): number {
    return this.scenario.voltsRange * headroom
  }

  get mostOverAmps(): number {
    return this.scenario.ampsRange * headroom
  }

  /** Voltage that is regulated to, drift included. */
  get targetVolts(): number {
    if (!this.isOn) return 0
    const volts = this.setVolts.produced(this.volts)
    return this.#regulatesAmps ? volts : this.#drifting(volts, this.volts)
  }

  get targetAmps(): number {
    if (!this.isOn) return 0
    const amps = this.setAmps.produced(this.amps)
    return this.#regulatesAmps ? this.#drifting(amps, this.amps) : amps
  }

  /** Coils are driven with a current, heater and anode with a voltage; the drift is that of this quantity. */
  get #regulatesAmps(): boolean {
    return this.name === 'coils'
  }

  clearTrip(): void {
    this.trip = null
    this.#overVoltsFor = 0
    this.#overAmpsFor = 0
  }

  /** The output's own protection: off, and off until cleared, once a level was passed for long enough. */
  protect(volts: number, amps: number, seconds: number): void {
    if (!this.isOn) return
    this.#overVoltsFor = volts > this.overVolts ? this.#overVoltsFor + seconds : 0
    this.#overAmpsFor = amps > this.overAmps ? this.#overAmpsFor + seconds : 0
    if (this.#overVoltsFor > overVoltageSeconds) this.#tripOff('over-voltage')
    else if (this.#overAmpsFor > overCurrentSeconds) this.#tripOff('over-current')
  }

  stepDrift(seconds: number): void {
    if (this.scenario.drift === 0) return
    const kept = Math.exp(-seconds / driftTimeSeconds)
    this.drift =
      this.drift * kept + this.scenario.drift * Math.sqrt(1 - kept * kept) * this.#driftRandom.normal()
  }

  #drifting(value: number, setpoint: number): number {
    return setpoint === 0 ? value : Math.max(0, value + this.drift)
  }

  #tripOff(trip: ProtectionTrip): void {
    this.trip = trip
    this.isOn = false
  }
}
