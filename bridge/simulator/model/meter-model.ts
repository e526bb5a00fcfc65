import type { MeterScenario } from '../scenario.ts'
import { Random } from './random.ts'
import { Reading } from './reading.ts'

/** A meter's input: it follows the quantity with a time constant, which also takes most of the ripple away. */
export class MeterModel {
  readonly scenario: MeterScenario
  readonly reading: Reading
  #followed = 0
  #frozen: string | null = null

  constructor(scenario: MeterScenario, seed: number, name: string) {
    this.scenario = scenario
    this.reading = new Reading(scenario.reading, new Random(seed, name))
  }

  step(value: number, seconds: number): void {
    this.#followed = value + (this.#followed - value) * Math.exp(-seconds / this.scenario.settlingSeconds)
  }

  /** What the meter shows now; null when it is out of its range. */
  shown(ripple: number): number | null {
    const value = this.reading.shown(this.#followed + this.scenario.offset + ripple)
    return Math.abs(value) > this.scenario.range ? null : value
  }

  /** The text of this reading, or the one it froze at. */
  text(ripple: number, overload: string, isFrozen: boolean): string {
    if (isFrozen && this.#frozen !== null) return this.#frozen
    const value = this.shown(ripple)
    const text = value === null ? overload : this.reading.text(value)
    this.#frozen = text
    return text
  }
}
