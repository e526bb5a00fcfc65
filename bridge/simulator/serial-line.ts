import { fragments, garbled, type LineSetting, rubbishLine } from './line-modes.ts'
import type { Random } from './model/random.ts'
import type { ScpiDevice } from './scpi/device.ts'

export type Cable = { send(bytes: string): void; unplug(): void }

const inputLimit = 1024
const fragmentMilliseconds = 2

/**
 * The serial line of one instrument. The instrument outlives every cable; a new cable takes the place of the last.
 * Text is Latin-1, so that every byte comes through as one character.
 */
export class SerialLine {
  readonly #device: () => ScpiDevice
  readonly #random: Random
  #setting: LineSetting = { mode: 'good', value: 0 }
  #cable: Cable | null = null
  #input = ''
  #isOverrun = false
  #sent = Promise.resolve()
  #timers = new Set<NodeJS.Timeout>()
  #floodTimer: NodeJS.Timeout | null = null

  constructor(device: () => ScpiDevice, random: Random) {
    this.#device = device
    this.#random = random
  }

  get setting(): LineSetting {
    return this.#setting
  }

  set(setting: LineSetting): void {
    this.#setting = setting
    this.#stopFlood()
    if (setting.mode === 'cut') this.#cable?.unplug()
    else if (setting.mode === 'flood') this.#startFlood(setting.value)
  }

  /** False when the line is cut. */
  plug(cable: Cable): boolean {
    if (this.#setting.mode === 'cut') return false
    const previous = this.#cable
    this.#cable = cable
    previous?.unplug()
    return true
  }

  unplugged(cable: Cable): void {
    if (this.#cable === cable) this.#cable = null
  }

  /** Bytes towards the instrument. A silent line loses them: it is dead in both directions. */
  receive(bytes: string): void {
    if (this.#setting.mode === 'silent') return
    this.#input += bytes
    for (let end = this.#input.indexOf('\n'); end !== -1; end = this.#input.indexOf('\n')) {
      const message = this.#input.slice(0, end)
      this.#input = this.#input.slice(end + 1)
      if (message.length > inputLimit) this.#overrun()
      else if (!this.#isOverrun) this.#handOver(message)
      this.#isOverrun = false
    }
    if (this.#input.length > inputLimit) {
      this.#overrun()
      this.#input = ''
    }
  }

  close(): void {
    this.#stopFlood()
    for (const timer of this.#timers) clearTimeout(timer)
    this.#timers.clear()
    this.#cable?.unplug()
    this.#cable = null
  }

  /** A message too long for the input buffer is lost up to its end, and reported once. */
  #overrun(): void {
    if (!this.#isOverrun) this.#device().status.report(-363)
    this.#isOverrun = true
  }

  #handOver(message: string): void {
    const device = this.#device()
    device.write(message)
    if (!device.hasAnswer) return
    const answer = `${device.read() ?? ''}\n`
    const { mode, value } = this.#setting
    if (mode === 'garble') this.#send(garbled(answer, value, this.#random))
    else if (mode === 'fragment') this.#later(fragments(answer, this.#random), fragmentMilliseconds)
    else if (mode === 'delay') this.#later([answer], value)
    else if (mode === 'flood') this.#send(`${rubbishLine(this.#random)}${answer}${rubbishLine(this.#random)}`)
    else this.#send(answer)
  }

  #send(bytes: string): void {
    if (this.#setting.mode !== 'silent') this.#cable?.send(bytes)
  }

  /** Parts one after the other, each after a pause, and after whatever was to be sent before. */
  #later(parts: string[], milliseconds: number): void {
    const cable = this.#cable
    this.#sent = this.#sent.then(async () => {
      for (const part of parts) {
        await this.#pause(milliseconds)
        if (this.#cable === cable) this.#send(part)
      }
    })
  }

  #pause(milliseconds: number): Promise<void> {
    return new Promise((resolve) => {
      const timer = setTimeout(() => {
        this.#timers.delete(timer)
        resolve()
      }, milliseconds)
      this.#timers.add(timer)
    })
  }

  #startFlood(milliseconds: number): void {
    this.#floodTimer = setInterval(() => this.#cable?.send(rubbishLine(this.#random)), milliseconds)
    this.#floodTimer.unref()
  }

  #stopFlood(): void {
    if (this.#floodTimer) clearInterval(this.#floodTimer)
    this.#floodTimer = null
  }
}
