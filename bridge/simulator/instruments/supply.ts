import type { Output, Polarity } from '#app/safety/types.ts'
import type { BenchModel } from '../model/bench-model.ts'
import { ripple } from '../model/ripple.ts'
import type { SupplyOutput } from '../model/supply-output.ts'
import { type Command, command, nothing } from '../scpi/commands.ts'
import { ScpiDevice } from '../scpi/device.ts'
import { ScpiError } from '../scpi/errors.ts'
import {
  inRange,
  type Numeric,
  type NumericKeyword,
  type Parameters,
  type Range,
} from '../scpi/parameters.ts'

const channels: readonly Output[] = ['heater', 'anode', 'coils']
/** Below this a channel counts as carrying no current, and its polarity relay may move. */
const relayAmps = 0.01
const readBackFilterSeconds = 0.01
const watchdogRange: Range = { minimum: 0, maximum: 3600, default: 0 }

/** Bits of STATus:QUEStionable: voltage and current as in SCPI-1999, the others in the bits left to the instrument. */
export const questionableBits = { overVoltage: 1, overCurrent: 2, inhibited: 512, watchdogExpired: 1024 }

type Setting = {
  range: (output: SupplyOutput) => Range
  get: (output: SupplyOutput) => number
  set: (output: SupplyOutput, value: number) => void
  text: (output: SupplyOutput, value: number) => string
}

const voltsSetting: Setting = {
  range: ({ scenario }) => ({ minimum: 0, maximum: scenario.voltsRange, default: 0 }),
  get: (output) => output.volts,
  set: (output, value) => {
    output.volts = output.setVolts.rounded(value)
  },
  text: (output, value) => output.setVolts.text(value),
}

const ampsSetting: Setting = {
  range: ({ scenario }) => ({ minimum: 0, maximum: scenario.ampsRange, default: scenario.ampsRange }),
  get: (output) => output.amps,
  set: (output, value) => {
    output.amps = output.setAmps.rounded(value)
  },
  text: (output, value) => output.setAmps.text(value),
}

const overVoltsSetting: Setting = {
  ...voltsSetting,
  range: ({ mostOverVolts }) => ({ minimum: 0, maximum: mostOverVolts, default: mostOverVolts }),
  get: (output) => output.overVolts,
  set: (output, value) => {
    output.overVolts = output.setVolts.rounded(value)
  },
}

const overAmpsSetting: Setting = {
  ...ampsSetting,
  range: ({ mostOverAmps }) => ({ minimum: 0, maximum: mostOverAmps, default: mostOverAmps }),
  get: (output) => output.overAmps,
  set: (output, value) => {
    output.overAmps = output.setAmps.rounded(value)
  },
}

/** The three-channel supply of a bench: 1 heater, 2 anode, 3 coils. */
export function createSupply(bench: BenchModel, advance: () => void): ScpiDevice {
  return new ScpiDevice({
    identity: ['COILSIDE', 'TRIPLE SUPPLY', bench.scenario.benchId.toUpperCase(), '1.0'],
    beforeMessage(status) {
      advance()
      status.questionable.update(questionableCondition(bench))
    },
    afterWellFormed: () => bench.feedWatchdog(),
    reset() {
      for (const output of Object.values(bench.outputs)) output.reset()
      bench.watchdog.timeoutSeconds = 0
      bench.watchdog.isExpired = false
    },
    commands: (status) =>
      [
        ...settingCommands(bench, '[SOURce#]:VOLTage[:LEVel][:IMMediate][:AMPLitude]', 'V', voltsSetting),
        ...settingCommands(bench, '[SOURce#]:CURRent[:LEVel][:IMMediate][:AMPLitude]', 'A', ampsSetting),
        ...settingCommands(bench, '[SOURce#]:VOLTage:PROTection[:LEVel]', 'V', overVoltsSetting),
        ...settingCommands(bench, '[SOURce#]:CURRent:PROTection[:LEVel]', 'A', overAmpsSetting),
        ...outputCommands(bench),
        ...watchdogCommands(bench),
        measureCommand('MEASure[:SCALar]:VOLTage[:DC]?', bench, (output) =>
          output.readVolts.text(output.readVolts.shown(voltsSeen(bench, output))),
        ),
        measureCommand('MEASure[:SCALar]:CURRent[:DC]?', bench, (output) =>
          output.readAmps.text(output.readAmps.shown(ampsSeen(bench, output))),
        ),
      ].map((entry) => refreshing(entry, () => status.questionable.update(questionableCondition(bench)))),
  })
}

/** A command may change a condition; the register must show it to the next command of the same message. */
function refreshing(entry: Command, refresh: () => void): Command {
  return {
    ...entry,
    execute(parameters, suffix) {
      const answer = entry.execute(parameters, suffix)
      refresh()
      return answer
    },
  }
}

function questionableCondition(bench: BenchModel): number {
  const trips = Object.values(bench.outputs).map(({ trip }) => trip)
  let condition = 0
  if (trips.includes('over-voltage')) condition |= questionableBits.overVoltage
  if (trips.includes('over-current')) condition |= questionableBits.overCurrent
  if (bench.isInhibited) condition |= questionableBits.inhibited
  if (bench.watchdog.isExpired) condition |= questionableBits.watchdogExpired
  return condition
}

function selected(bench: BenchModel, parameters: Parameters, suffix: number | undefined): SupplyOutput[] {
  return parameters
    .channels(channels.length, suffix)
    .map((channel) => bench.outputs[channels[channel - 1] as Output])
}

function settingCommands(bench: BenchModel, header: string, unit: string, setting: Setting): Command[] {
  return [
    command(
      header,
      (parameters, suffix): { numeric: Numeric; outputs: SupplyOutput[] } => ({
        numeric: parameters.numeric(unit),
        outputs: selected(bench, parameters, suffix),
      }),
      ({ numeric, outputs }) => {
        const values = outputs.map((output) => inRange(numeric, setting.range(output)))
        outputs.forEach((output, index) => {
          setting.set(output, values[index] as number)
        })
        return undefined
      },
    ),
    command(
      `${header}?`,
      (parameters, suffix): { keyword: NumericKeyword | null; outputs: SupplyOutput[] } => ({
        keyword: parameters.optionalKeyword(),
        outputs: selected(bench, parameters, suffix),
      }),
      ({ keyword, outputs }) =>
        outputs
          .map((output) =>
            setting.text(output, keyword ? setting.range(output)[keyword] : setting.get(output)),
          )
          .join(','),
    ),
  ]
}

function outputCommands(bench: BenchModel): Command[] {
  return [
    command(
      'OUTPut#[:STATe]',
      (parameters, suffix) => ({ isOn: parameters.boolean(), outputs: selected(bench, parameters, suffix) }),
      ({ isOn, outputs }) => {
        if (isOn) for (const output of outputs) checkSwitchOn(bench, output)
        for (const output of outputs) output.isOn = isOn
        if (isOn) bench.watchdog.isExpired = false
        return undefined
      },
    ),
    command(
      'OUTPut#[:STATe]?',
      (parameters, suffix) => selected(bench, parameters, suffix),
      (outputs) => outputs.map(({ isOn }) => (isOn ? '1' : '0')).join(','),
    ),
    command(
      'OUTPut#:POLarity',
      (parameters, suffix) => ({
        polarity: (parameters.choice(['NORMal', 'INVerted']) === 'NORMal' ? 1 : -1) as Polarity,
        outputs: selected(bench, parameters, suffix),
      }),
      ({ polarity, outputs }) => {
        if (outputs.some(({ name }) => name !== 'coils')) throw new ScpiError(-241, 'no relay')
        for (const output of outputs) {
          if (output.polarity !== polarity && bench.coilAmps > relayAmps) {
            throw new ScpiError(-221, 'channel carries current')
          }
          output.polarity = polarity
        }
        return undefined
      },
    ),
    command(
      'OUTPut#:POLarity?',
      (parameters, suffix) => selected(bench, parameters, suffix),
      (outputs) => outputs.map(({ polarity }) => (polarity === 1 ? 'NORM' : 'INV')).join(','),
    ),
    command(
      'OUTPut#:PROTection:CLEar',
      (parameters, suffix) => selected(bench, parameters, suffix),
      (outputs) => {
        for (const output of outputs) output.clearTrip()
        return undefined
      },
    ),
  ]
}

function checkSwitchOn(bench: BenchModel, output: SupplyOutput): void {
  if (output.trip) throw new ScpiError(-221, `${output.trip} protection has tripped`)
  if (output.name !== 'heater' && bench.isInhibited) throw new ScpiError(-221, 'interlock open')
}

/**
 * LINK:TIMeout is an extension of this instrument, not of SCPI-1999, which has no communication watchdog: without a
 * well-formed message for this many seconds all outputs go off and keep their setpoints. 0 disables it.
 */
function watchdogCommands(bench: BenchModel): Command[] {
  return [
    command(
      'LINK:TIMeout',
      (parameters) => parameters.numeric('S'),
      (numeric) => {
        bench.watchdog.timeoutSeconds = inRange(numeric, watchdogRange)
        bench.feedWatchdog()
        return undefined
      },
    ),
    command('LINK:TIMeout?', nothing, () => String(bench.watchdog.timeoutSeconds)),
  ]
}

function measureCommand(header: string, bench: BenchModel, read: (output: SupplyOutput) => string): Command {
  return command(
    header,
    (parameters, suffix) => selected(bench, parameters, suffix),
    (outputs) => outputs.map(read).join(','),
  )
}

function voltsSeen(bench: BenchModel, output: SupplyOutput): number {
  if (output.name === 'coils') return bench.coilVolts
  const isHeater = output.name === 'heater'
  const volts = isHeater ? bench.heaterVolts : bench.anodeVolts
  if (!isHeater && bench.faults.has('read-back')) return output.isOn ? output.volts : volts
  return (
    volts + (output.isOn ? ripple(output.scenario.ripple, readBackFilterSeconds, bench.elapsedSeconds) : 0)
  )
}

function ampsSeen(bench: BenchModel, output: SupplyOutput): number {
  if (output.name === 'heater') return bench.heaterAmps
  if (output.name === 'anode') return bench.anodeAmps
  return (
    bench.coilAmps +
    (output.isOn ? ripple(output.scenario.ripple, readBackFilterSeconds, bench.elapsedSeconds) : 0)
  )
}
