import { advanceCoilTemperature, coilResistanceOhms } from '#app/physics/coil-heating.ts'
import type { Output } from '#app/safety/types.ts'
import type { BenchScenario } from '../scenario.ts'
import type { FaultName } from './faults.ts'
import { MeterModel } from './meter-model.ts'
import { SupplyOutput } from './supply-output.ts'
import { anodeCurrentAmps, Filament, voltsAtCurrent } from './tube.ts'

const stepSeconds = 0.005
/** Heat and drift change slowly and are advanced in whole seconds and tenths. */
const stepsPerHeating = 20
const stepsPerDrift = 200
const dischargeVolts = 25
const openHeaterOhms = 1e9

/**
 * One bench: supply outputs, tube, coils, interlock contacts and the inputs of the meters. It moves in fixed steps
 * up to the time it is asked for, so that the same questions at the same times get the same answers.
 */
export class BenchModel {
  readonly scenario: BenchScenario
  readonly outputs: Record<Output, SupplyOutput>
  readonly anodeMeter: MeterModel
  readonly coilMeter: MeterModel
  readonly filament = new Filament()
  readonly faults = new Map<FaultName, number>()
  readonly watchdog = { timeoutSeconds: 0, fedAtSeconds: 0, isExpired: false }
  readonly #startSeconds: number
  heaterVolts = 0
  heaterAmps = 0
  anodeVolts = 0
  anodeAmps = 0
  coilAmps = 0
  coilCelsius: number
  #isEStopIn = false
  #isEnclosureOpen = false
  #steps = 0

  constructor(scenario: BenchScenario, seed: number, startSeconds: number) {
    this.scenario = scenario
    this.#startSeconds = startSeconds
    this.outputs = {
      heater: new SupplyOutput('heater', scenario.outputs.heater, seed),
      anode: new SupplyOutput('anode', scenario.outputs.anode, seed),
      coils: new SupplyOutput('coils', scenario.outputs.coils, seed),
    }
    this.anodeMeter = new MeterModel(scenario.anodeMeter, seed, 'anode meter')
    this.coilMeter = new MeterModel(scenario.coilMeter, seed, 'coil meter')
    this.coilCelsius = scenario.coils.ambientCelsius
  }

  get seconds(): number {
    return this.#startSeconds + this.elapsedSeconds
  }

  /** Time since the bench was switched on. */
  get elapsedSeconds(): number {
    return this.#steps * stepSeconds
  }

  get isEStopIn(): boolean {
    return this.#isEStopIn
  }

  get isEnclosureOpen(): boolean {
    return this.#isEnclosureOpen
  }

  /** While a contact is open, anode and coils cannot be on, whatever the instruments are told. */
  get isInhibited(): boolean {
    return this.#isEStopIn || this.#isEnclosureOpen
  }

  get coilOhms(): number {
    const { ohms, celsius } = this.scenario.coils
    return coilResistanceOhms({
      temperatureCelsius: this.coilCelsius,
      referenceOhms: ohms,
      referenceCelsius: celsius,
    })
  }

  get coilVolts(): number {
    return this.coilAmps * this.coilOhms
  }

  /** Positive where the polarity relay is at rest. */
  get signedCoilAmps(): number {
    return this.coilAmps * this.outputs.coils.polarity
  }

  /** The e-stop button pressed in or out. Opening a contact takes anode and coils off; closing it brings nothing back. */
  setEStop(isIn: boolean): void {
    this.#isEStopIn = isIn
    this.#inhibit()
  }

  setEnclosure(isOpen: boolean): void {
    this.#isEnclosureOpen = isOpen
    this.#inhibit()
  }

  feedWatchdog(): void {
    this.watchdog.fedAtSeconds = this.seconds
  }

  /** Steps up to a time; a time in the past changes nothing. */
  advanceTo(nowSeconds: number): void {
    const due = Math.floor((nowSeconds - this.#startSeconds) / stepSeconds + 1e-9)
    while (this.#steps < due) {
      this.#steps++
      this.#step()
    }
  }

  #step(): void {
    this.#watch()
    this.#stepHeater()
    this.#stepAnode()
    this.#stepCoils()
    this.anodeMeter.step(this.anodeVolts, stepSeconds)
    this.coilMeter.step(this.coilAmps, stepSeconds)
    if (this.#steps % stepsPerHeating === 0) this.#heatCoils(stepSeconds * stepsPerHeating)
    if (this.#steps % stepsPerDrift === 0) {
      for (const output of Object.values(this.outputs)) output.stepDrift(stepSeconds * stepsPerDrift)
    }
  }

  #watch(): void {
    const { timeoutSeconds, fedAtSeconds } = this.watchdog
    if (timeoutSeconds === 0 || this.seconds - fedAtSeconds <= timeoutSeconds) return
    for (const output of Object.values(this.outputs)) {
      if (output.isOn) this.watchdog.isExpired = true
      output.isOn = false
    }
  }

  #inhibit(): void {
    if (!this.isInhibited) return
    this.outputs.anode.isOn = false
    this.outputs.coils.isOn = false
  }

  #stepHeater(): void {
    const output = this.outputs.heater
    const isOpen = this.faults.has('heater-open')
    const ohms = isOpen ? openHeaterOhms : this.filament.ohms
    const sag = this.faults.get('heater-sag')
    const wanted = output.isOn && sag !== undefined ? Math.min(sag, output.targetVolts) : output.targetVolts
    const target = Math.min(wanted, output.targetAmps * ohms)
    this.heaterVolts = approach(this.heaterVolts, target, output)
    this.heaterAmps = isOpen ? 0 : this.heaterVolts / ohms
    this.filament.step(this.heaterVolts * this.heaterAmps, stepSeconds)
    output.protect(this.heaterVolts, this.heaterAmps, stepSeconds)
  }

  #stepAnode(): void {
    const output = this.outputs.anode
    const high = this.faults.get('over-voltage') ?? 1
    const wrong = this.faults.get('read-back') ?? 1
    const discharge = this.faults.get('anode-discharge')
    const wanted = output.targetVolts * high * wrong
    const limitAmps = output.targetAmps
    const kelvin = this.filament.kelvin
    let target = wanted
    if (output.isOn) {
      if (discharge !== undefined && discharge > limitAmps) target = Math.min(wanted, dischargeVolts)
      else target = Math.min(wanted, voltsAtCurrent(limitAmps, kelvin, wanted))
    }
    this.anodeVolts = approach(this.anodeVolts, target, output)
    const isDischarging = discharge !== undefined && output.isOn && this.anodeVolts > dischargeVolts / 2
    this.anodeAmps = isDischarging
      ? Math.min(discharge, limitAmps)
      : anodeCurrentAmps(this.anodeVolts, kelvin)
    const protectedVolts = this.faults.has('over-voltage') ? 0 : this.anodeVolts
    output.protect(protectedVolts, this.anodeAmps, stepSeconds)
  }

  #stepCoils(): void {
    const output = this.outputs.coils
    const high = this.faults.get('over-current')
    const wanted = output.targetAmps * (high ?? 1)
    const target = Math.min(wanted, output.targetVolts / this.coilOhms)
    this.coilAmps = approach(this.coilAmps, target, output)
    output.protect(this.coilVolts, high === undefined ? this.coilAmps : 0, stepSeconds)
  }

  #heatCoils(seconds: number): void {
    const held = this.faults.get('coil-hot')
    if (held !== undefined) {
      this.coilCelsius = held
      return
    }
    this.coilCelsius = advanceCoilTemperature({
      ...this.scenario.coils,
      temperatureCelsius: this.coilCelsius,
      powerWatts: this.coilAmps * this.coilVolts,
      durationSeconds: seconds,
    })
  }
}

function approach(value: number, target: number, output: SupplyOutput): number {
  const { riseSeconds, fallSeconds } = output.scenario
  const time = target > value ? riseSeconds : fallSeconds
  return target + (value - target) * Math.exp(-stepSeconds / time)
}
