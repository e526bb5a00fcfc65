import { createAnodeMeter, createCoilMeter, createInterlockUnit } from './instruments/meters.ts'
import { createSupply } from './instruments/supply.ts'
import { Beam, type Orbit, type Picture } from './model/beam.ts'
import { BenchModel } from './model/bench-model.ts'
import type { BenchScenario } from './scenario.ts'
import type { ScpiDevice } from './scpi/device.ts'

export const instrumentNames = ['supply', 'anode-meter', 'coil-meter', 'interlock'] as const
export type InstrumentName = (typeof instrumentNames)[number]

export type Clock = { now(): number }

/** One virtual bench: its model, and the instruments that speak for it. */
export class SimulatedBench {
  readonly scenario: BenchScenario
  readonly #clock: Clock
  readonly #seed: number
  readonly #beam: Beam
  #model: BenchModel
  #instruments: Record<InstrumentName, ScpiDevice>

  constructor(scenario: BenchScenario, seed: number, clock: Clock) {
    this.scenario = scenario
    this.#clock = clock
    this.#seed = seed
    this.#beam = new Beam(scenario)
    this.#model = new BenchModel(scenario, seed, clock.now())
    this.#instruments = this.#createInstruments()
  }

  /** The model, brought up to the present. */
  get model(): BenchModel {
    this.advance()
    return this.#model
  }

  instrument(name: InstrumentName): ScpiDevice {
    return this.#instruments[name]
  }

  advance(): void {
    this.#model.advanceTo(this.#clock.now())
  }

  /** Everything as it was when the bench was first switched on, with the same seed. */
  powerCycle(): void {
    this.#model = new BenchModel(this.scenario, this.#seed, this.#clock.now())
    this.#instruments = this.#createInstruments()
  }

  /** The path of the electrons at this moment; null without a beam. */
  orbit(): Orbit | null {
    const { anodeVolts, signedCoilAmps } = this.model
    return this.#beam.orbit(anodeVolts, signedCoilAmps)
  }

  picture(): Picture {
    const { anodeVolts, signedCoilAmps, anodeAmps } = this.model
    return this.#beam.picture(anodeVolts, signedCoilAmps, anodeAmps)
  }

  #createInstruments(): Record<InstrumentName, ScpiDevice> {
    const model = this.#model
    const advance = () => model.advanceTo(this.#clock.now())
    return {
      supply: createSupply(model, advance),
      'anode-meter': createAnodeMeter(model, advance),
      'coil-meter': createCoilMeter(model, advance),
      interlock: createInterlockUnit(model, advance),
    }
  }
}
