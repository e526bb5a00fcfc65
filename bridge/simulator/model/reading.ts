import type { Quality } from '../scenario.ts'
import type { Random } from './random.ts'

/** One instrument's way of setting or reading a quantity: a fixed error inside its data sheet, noise, digits. */
export class Reading {
  readonly quality: Quality
  readonly #gain: number
  readonly #offset: number
  readonly #random: Random

  constructor(quality: Quality, random: Random) {
    this.quality = quality
    this.#random = random
    this.#gain = 1 + quality.gainError * random.symmetric()
    this.#offset = quality.offsetError * random.symmetric()
  }

  /** The true quantity that a setpoint gives; a setpoint of zero gives no less than zero. */
  produced(setpoint: number): number {
    return Math.max(0, setpoint * this.#gain + this.#offset)
  }

  /** What is shown for a true quantity. */
  shown(value: number): number {
    const noise = this.quality.noise === 0 ? 0 : this.quality.noise * this.#random.normal()
    return this.rounded(value * this.#gain + this.#offset + noise)
  }

  rounded(value: number): number {
    const { step } = this.quality
    return step === 0 ? value : Math.round(value / step) * step
  }

  /** NR2 with the digits of this quantity, NR3 where it has no last digit. */
  text(value: number): string {
    const { step } = this.quality
    if (step === 0) return value.toExponential(12)
    return value.toFixed(Math.max(0, Math.round(-Math.log10(step)))).replace(/^-(0\.?0*)$/, '$1')
  }
}
