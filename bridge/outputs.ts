import type { BenchLimits, ChannelValues, Output, Polarity } from '#app/safety/types.ts'
import { dischargedVolts, type OutputView } from '#app/safety/view.ts'
import { type Clock, wait } from './clock.ts'
import type { InstrumentSet } from './instrument-set.ts'
import { Ramp } from './ramp.ts'

/** Coil current that is read as none: the relay may move. */
const zeroAmps = 0.01
const polaritySeconds = 30
const relaySettleSeconds = 0.1
const startTries = 10
const startWaitSeconds = 0.1

/** Something else took the outputs down while a command was being carried out. */
export class OvertakenError extends Error {
  override readonly name = 'OvertakenError'
}

type OutputsOptions = {
  clock: Clock
  instruments: InstrumentSet
  limits: BenchLimits
  values: () => ChannelValues
  onChange: () => void
}

/**
 * The three outputs as commanded. Every way up goes through a ramp from zero; every way down at once goes through
 * `drop`, after which nothing that was under way is sent any more.
 */
export class Outputs {
  readonly views: Record<Output, OutputView>
  polarity: Polarity = 1
  polarityChanging = false
  readonly #options: OutputsOptions
  readonly #ramps: Record<'anode' | 'coils', Ramp>
  #generation = 0
  /** False while the supply may hold the relay the other way: a move that was sent and not confirmed. */
  #isPolarityKnown = false

  constructor(options: OutputsOptions) {
    this.#options = options
    const off = (): OutputView => ({ on: false, asked: 0, commanded: 0, changedAt: options.clock.now() })
    this.views = { heater: off(), anode: off(), coils: off() }
    this.#ramps = { anode: this.#rampOf('anode'), coils: this.#rampOf('coils') }
  }

  get anyOn(): boolean {
    return Object.values(this.views).some(({ on }) => on)
  }

  /** Everything off, read back as off, protection and watchdog set, polarity as it is here. */
  async prepare(): Promise<void> {
    const { supply, protection } = this.#options.instruments
    await supply.prepare(protection)
    for (let attempt = 1; ; attempt++) {
      try {
        // The relay does not move before the coil current has died away.
        await this.#moveRelay(this.polarity)
        break
      } catch (error) {
        if (attempt === startTries) throw error
        await wait(startWaitSeconds)
      }
    }
    for (const view of Object.values(this.views)) view.changedAt = this.#options.clock.now()
  }

  /** Marks outputs as off and ends all ramps; sends nothing. */
  drop(which: readonly Output[]): void {
    this.#generation++
    this.#ramps.anode.cancel()
    this.#ramps.coils.cancel()
    this.polarityChanging = false
    for (const output of which) this.#change(output, { on: false, asked: 0, commanded: 0 })
  }

  async switchHeater(on: boolean): Promise<void> {
    const { supply } = this.#options.instruments
    if (!on) {
      await supply.switchOutput('heater', false)
      this.#change('heater', { on: false, asked: 0, commanded: 0 })
      return
    }
    const generation = this.#generation
    await this.#arm(generation)
    const { nominal } = this.#options.limits.heaterVolts
    await this.#whole('heater', generation, async (goOn) => {
      await supply.setVolts('heater', nominal)
      goOn()
      this.#change('heater', { on: true, asked: nominal, commanded: nominal })
      await supply.switchOutput('heater', true)
    })
  }

  /** Ramps an output to a value in volts or amperes; switches it on at zero first, and off once back at zero. */
  async set(output: 'anode' | 'coils', value: number): Promise<void> {
    const view = this.views[output]
    if (value > 0 && !view.on) {
      const generation = this.#generation
      await this.#arm(generation)
      await this.#switchOnAtZero(output, generation)
    }
    this.#change(output, { asked: value })
    if (view.on) this.#ramps[output].to(value)
  }

  /**
   * Anode to zero, coils to zero and read as zero, relay, and back. Resolves with whether the polarity was changed;
   * when it was not, both outputs are switched off at zero.
   */
  async changePolarity(polarity: Polarity): Promise<boolean> {
    if (polarity === this.polarity) return true
    const generation = this.#generation
    const isWanted = () => generation === this.#generation
    const { supply } = this.#options.instruments
    let isDone = false
    this.polarityChanging = true
    this.#ramps.anode.to(0)
    this.#ramps.coils.to(0)
    try {
      if (!(await this.#until(() => this.#isAtZero(), isWanted))) return false
      if (this.views.coils.on) {
        await supply.switchOutput('coils', false)
        if (isWanted()) this.#change('coils', { on: false, commanded: 0 })
      }
      if (!isWanted()) return false
      await this.#moveRelay(polarity)
      await wait(relaySettleSeconds)
      if (!isWanted()) return false
      await this.#restore(generation)
      isDone = true
      return true
    } finally {
      if (isWanted()) {
        this.polarityChanging = false
        if (!isDone) this.#stayAtZero()
        this.#options.onChange()
      }
    }
  }

  async #moveRelay(polarity: Polarity): Promise<void> {
    this.#isPolarityKnown = false
    await this.#options.instruments.supply.setPolarity(polarity)
    this.polarity = polarity
    this.#isPolarityKnown = true
  }

  #stayAtZero(): void {
    for (const output of ['anode', 'coils'] as const) {
      this.#change(output, { asked: 0 })
      if (this.views[output].on) this.#ramps[output].to(0)
    }
  }

  async #restore(generation: number): Promise<void> {
    const isWanted = () => generation === this.#generation
    const { anode, coils } = this.views
    if (coils.asked > 0) {
      await this.#switchOnAtZero('coils', generation)
      this.#ramps.coils.to(coils.asked)
      await this.#until(() => coils.commanded === coils.asked, isWanted)
    }
    if (isWanted() && anode.on) this.#ramps.anode.to(anode.asked)
  }

  #switchOnAtZero(output: 'anode' | 'coils', generation: number): Promise<void> {
    const { supply } = this.#options.instruments
    return this.#whole(output, generation, async (goOn) => {
      if (output === 'coils' && !this.#isPolarityKnown) await this.#moveRelay(this.polarity)
      goOn()
      if (output === 'anode') await supply.setVolts('anode', 0)
      else await supply.setAmps('coils', 0)
      goOn()
      this.#change(output, { on: true, commanded: 0 })
      await supply.switchOutput(output, true)
    })
  }

  /**
   * Before the first output goes on, the supply is prepared again: it may have been switched off and on meanwhile, and
   * then knows nothing of its watchdog.
   */
  async #arm(generation: number): Promise<void> {
    if (!this.anyOn) await this.prepare()
    this.#mustBe(generation)
  }

  #mustBe(generation: number): void {
    if (generation !== this.#generation) throw new OvertakenError('The outputs were taken down meanwhile')
  }

  /**
   * Does it whole or not at all: the output is commanded off when a part of it fails or was overtaken. The work asks
   * `goOn` before each further step, so that nothing of it is sent after the outputs were taken down.
   */
  async #whole(output: Output, generation: number, work: (goOn: () => void) => Promise<void>): Promise<void> {
    try {
      this.#mustBe(generation)
      await work(() => this.#mustBe(generation))
      this.#mustBe(generation)
    } catch (error) {
      this.#change(output, { on: false, asked: 0, commanded: 0 })
      this.#options.instruments.supply.switchOutput(output, false, { urgent: true }).catch(() => {
        // What remains of it is found by the read-back.
      })
      throw error
    }
  }

  #rampOf(output: 'anode' | 'coils'): Ramp {
    const { clock, limits, instruments } = this.#options
    return new Ramp({
      output,
      clock,
      perSecond: () => (output === 'anode' ? limits.anodeVoltsPerSecond : limits.coilAmpsPerSecond),
      commanded: () => this.views[output].commanded,
      send: async (value) => {
        const generation = this.#generation
        if (output === 'anode') await instruments.supply.setVolts('anode', value)
        else await instruments.supply.setAmps('coils', value)
        if (generation === this.#generation) this.#change(output, { commanded: value })
      },
      onArrived: (target) => {
        if (target === 0 && this.views[output].asked === 0 && !this.polarityChanging) void this.#end(output)
      },
    })
  }

  /** Marked before it is sent: a setpoint that comes meanwhile switches on again, behind this in the line's queue. */
  async #end(output: 'anode' | 'coils'): Promise<void> {
    this.#change(output, { on: false, commanded: 0 })
    await this.#options.instruments.supply.switchOutput(output, false).catch(() => {
      // It stays on at zero; should it carry anything, the read-back finds it.
    })
  }

  #isAtZero(): boolean {
    const { anode, coils } = this.views
    const { coilAmps, coilSupplyAmps, anodeVolts } = this.#options.values()
    return (
      anode.commanded === 0 &&
      coils.commanded === 0 &&
      [coilAmps, coilSupplyAmps].every((amps) => amps !== null && Math.abs(amps) < zeroAmps) &&
      anodeVolts !== null &&
      anodeVolts < dischargedVolts
    )
  }

  async #until(isDone: () => boolean, isWanted: () => boolean): Promise<boolean> {
    const end = this.#options.clock.now() + polaritySeconds
    while (isWanted() && this.#options.clock.now() < end) {
      if (isDone()) return true
      await wait(relaySettleSeconds / 2)
    }
    return false
  }

  #change(output: Output, change: Partial<OutputView>): void {
    const view = this.views[output]
    const on = change.on ?? view.on
    const commanded = change.commanded ?? view.commanded
    const changedAt =
      on !== view.on || commanded !== view.commanded ? this.#options.clock.now() : view.changedAt
    Object.assign(view, { asked: change.asked ?? view.asked, on, commanded, changedAt })
    this.#options.onChange()
  }
}
