import { type Output, outputs, type Polarity } from '#app/safety/types.ts'
import { parseBooleans, parseNumbers } from './answers.ts'
import { Confirmed, type Values } from './confirmed.ts'
import { type InstrumentOptions, instrumentOf, lineOf } from './instrument-line.ts'
import type { Line } from './line.ts'
import { isUnanswered, LineError } from './line-errors.ts'
import type { SupplyProfile } from './profiles.ts'
import type { Supply, SupplyProtection, SupplyReading } from './types.ts'

const toleranceOfRange = 0.02

type SupplyOptions = InstrumentOptions & { profile: SupplyProfile; channels?: Record<Output, number> }
type Urgency = { urgent?: boolean }

/**
 * A supply of three outputs, over one line. Whenever the line is opened, and when it is given up, all outputs are
 * commanded off.
 *
 * A set whose confirmation was lost is not repeated: it is read back, and rejects with `LineError` (`unconfirmed`)
 * unless the supply holds what was set. `measure` resolves with nulls for an answer that cannot be read, and rejects
 * with `LineError` when there was none.
 */
export function createSupply(options: SupplyOptions): Supply {
  const { profile } = options
  const channels = options.channels ?? channelsOf(profile)
  const words = profile.commands
  const all = `(@${outputs.map((output) => channels[output]).join(',')})`
  const at = (output: Output) => `(@${channels[output]})`
  const allOff = `${words.output} OFF,${all}`
  const line = lineOf(options, {
    serial: profile.serial,
    limitSeconds: profile.timing.limitSeconds,
    greeting: allOff,
  })
  const spans = (quantity: 'volts' | 'amps') =>
    outputs.map((output) => profile.outputs[output][quantity].maximum * toleranceOfRange)
  const confirmed = new Confirmed([...spans('volts'), ...spans('amps')])

  const setLevel = async (
    header: string,
    output: Output,
    value: number,
    resolution: number,
    urgency?: Urgency,
  ) => {
    if (!Number.isFinite(value) || value < 0) throw new RangeError(`${header} cannot be set to ${value}`)
    const command = `${header} ${decimal(value)},${at(output)}`
    await setOrReadBack(line, command, urgency, async () => {
      const held = await line.query(`${header}? ${at(output)}`, (answer) => parseNumbers(answer, 1), urgency)
      return held[0] !== null && held[0] !== undefined && Math.abs(held[0] - value) <= resolution
    })
  }

  /** All states twice in one answer: an output that is on must not be read as off for one damaged character. */
  const states = (urgency?: Urgency) =>
    line.query(`${words.output}? ${all};:${words.output}? ${all}`, parseStates, urgency)

  const isOn = async (output: Output, urgency?: Urgency) =>
    (await states(urgency))[outputs.indexOf(output)] ?? null

  const setVolts: Supply['setVolts'] = (output, volts, urgency) =>
    setLevel(words.volts, output, volts, profile.outputs[output].volts.resolution, urgency)
  const setAmps: Supply['setAmps'] = (output, amps, urgency) =>
    setLevel(words.amps, output, amps, profile.outputs[output].amps.resolution, urgency)

  const askAll = async (): Promise<Values> => {
    const text = `${words.measureVolts} ${all};:${words.measureAmps} ${all}`
    return line.query(text, (answer) => {
      const [volts, amps, ...more] = answer.split(';').map((part) => parseNumbers(part, outputs.length))
      return volts && amps && more.length === 0 ? [...volts, ...amps] : null
    })
  }

  const protect = async (protection: SupplyProtection) => {
    const level = (output: Output, quantity: 'volts' | 'amps', wanted: number) =>
      Math.min(wanted, profile.outputs[output][quantity].maximum * profile.protectionHeadroom)
    const { voltsProtection, ampsProtection, watchdogExtension } = words
    await line.set(
      `${voltsProtection} ${decimal(level('heater', 'volts', protection.heaterVolts))},${at('heater')}`,
    )
    await line.set(
      `${voltsProtection} ${decimal(level('anode', 'volts', protection.anodeVolts))},${at('anode')}`,
    )
    await line.set(
      `${ampsProtection} ${decimal(level('anode', 'amps', protection.anodeAmps))},${at('anode')}`,
    )
    await line.set(`${ampsProtection} ${decimal(level('coils', 'amps', protection.coilAmps))},${at('coils')}`)
    if (watchdogExtension) await line.set(`${watchdogExtension} ${decimal(protection.watchdogSeconds)}`)
  }

  return Object.assign(instrumentOf(options.name, line), {
    async prepare(protection: SupplyProtection) {
      await setOrReadBack(line, allOff, undefined, async () => !(await states()).includes(true))
      for (const output of outputs) {
        const { regulates, volts, amps } = profile.outputs[output]
        await setVolts(output, regulates === 'volts' ? 0 : volts.maximum)
        await setAmps(output, regulates === 'amps' ? 0 : amps.maximum)
      }
      await line.set(`${words.clearProtection} ${all}`)
      if ((await states()).includes(true))
        throw new LineError('unconfirmed', 'An output reads as on after all off')
      await protect(protection)
    },
    setVolts,
    setAmps,
    async switchOutput(output: Output, on: boolean, urgency?: Urgency) {
      const command = `${words.output} ${on ? 'ON' : 'OFF'},${at(output)}`
      await setOrReadBack(line, command, urgency, async () => (await isOn(output, urgency)) === on)
    },
    async setPolarity(polarity: Polarity) {
      await line.set(`${words.polarity} ${polarity === 1 ? 'NORM' : 'INV'},${at('coils')}`)
    },
    async measure() {
      try {
        return readingOf(await confirmed.read(askAll))
      } catch (error) {
        if (error instanceof LineError && error.fault === 'unparsable') return readingOf([])
        throw error
      }
    },
    async isOn(output: Output) {
      try {
        return await isOn(output)
      } catch (error) {
        if (error instanceof LineError && error.fault === 'unparsable') return null
        throw error
      }
    },
  })
}

/** Sets once. When the confirmation was lost, asks `isHeld` whether the supply holds it all the same. */
async function setOrReadBack(
  line: Line,
  command: string,
  urgency: Urgency | undefined,
  isHeld: () => Promise<boolean>,
): Promise<void> {
  try {
    await line.set(command, urgency)
  } catch (error) {
    if (!(error instanceof LineError) || error.fault !== 'unconfirmed') throw error
    const held = await isHeld().catch((later: unknown) => {
      if (isUnanswered(later)) return false
      throw later
    })
    if (!held) throw error
  }
}

function parseStates(answer: string): boolean[] | null {
  const [first, second, ...more] = answer.split(';').map((part) => parseBooleans(part, outputs.length))
  if (!first || !second || more.length > 0) return null
  return first.every((state, index) => state === second[index]) ? first : null
}

function readingOf(values: Values): SupplyReading {
  const pair = (output: Output) => {
    const index = outputs.indexOf(output)
    return { volts: values[index] ?? null, amps: values[outputs.length + index] ?? null }
  }
  return { heater: pair('heater'), anode: pair('anode'), coils: pair('coils') }
}

function channelsOf({ outputs: profiles }: SupplyProfile): Record<Output, number> {
  return { heater: profiles.heater.channel, anode: profiles.anode.channel, coils: profiles.coils.channel }
}

/** Plain decimals, never an exponent; finer than the last digit of any setting. */
function decimal(value: number): string {
  return value.toFixed(6).replace(/\.?0+$/, '')
}
