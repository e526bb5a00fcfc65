import type { Output } from '#app/safety/types.ts'
import type { Clock } from './clock.ts'

const stepSeconds = 0.1
/** After a pause of the process a ramp goes on from where it was, not by all the time that has passed. */
const longestStepSeconds = 0.2

/** The next commanded value on the way to a target, at most `perSecond` × `seconds` away. */
export function nextCommanded(commanded: number, target: number, perSecond: number, seconds: number): number {
  const step = perSecond * seconds
  return Math.abs(target - commanded) <= step ? target : commanded + Math.sign(target - commanded) * step
}

type RampOptions = {
  output: Exclude<Output, 'heater'>
  clock: Clock
  perSecond: () => number
  commanded: () => number
  /** Sends one step. A step that fails leaves what is commanded as it was, and the ramp tries again. */
  send: (value: number) => Promise<void>
  /** The target was reached. */
  onArrived: (target: number) => void
}

/** Takes one setpoint to its target in small steps. Cancelled, it sends nothing more. */
export class Ramp {
  readonly #options: RampOptions
  #target = 0
  #timer: NodeJS.Timeout | null = null
  #lastAt = 0
  #isSending = false

  constructor(options: RampOptions) {
    this.#options = options
  }

  to(target: number): void {
    this.#target = target
    if (this.#timer) return
    this.#lastAt = this.#options.clock.now()
    this.#timer = setInterval(() => void this.#step(), stepSeconds * 1000)
  }

  cancel(): void {
    if (this.#timer) clearInterval(this.#timer)
    this.#timer = null
  }

  async #step(): Promise<void> {
    if (this.#isSending) return
    const now = this.#options.clock.now()
    const elapsed = Math.min(longestStepSeconds, now - this.#lastAt)
    this.#lastAt = now
    const value = nextCommanded(this.#options.commanded(), this.#target, this.#options.perSecond(), elapsed)
    this.#isSending = true
    const isSent = await this.#options.send(value).then(
      () => true,
      () => false,
    )
    this.#isSending = false
    if (!isSent || this.#timer === null || value !== this.#target) return
    this.cancel()
    this.#options.onArrived(value)
  }
}
