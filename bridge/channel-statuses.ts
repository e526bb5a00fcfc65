import { ChannelWatch } from '#app/analysis/settled-window.ts'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import type { ChannelStatus } from '#app/protocol/messages.ts'
import {
  type Channel,
  type ChannelValues,
  channels,
  type Output,
  outputs as outputNames,
} from '#app/safety/types.ts'
import type { OutputView } from '#app/safety/view.ts'
import { differenceInWords } from './channel-words.ts'

const outputOf: Record<Channel, Output | null> = {
  heaterVolts: 'heater',
  heaterAmps: 'heater',
  anodeVolts: 'anode',
  anodeSupplyVolts: 'anode',
  anodeAmps: 'anode',
  coilAmps: 'coils',
  coilSupplyAmps: 'coils',
  coilVolts: 'coils',
  coilCelsius: null,
}

type Tolerance = { settled: number; nearZero: number }

/** Channels without a tolerance of their own take that of the quantity which they follow. */
function tolerances({ tolerance, limits, coilResistance }: BenchConfig): Record<Channel, Tolerance> {
  const anode = { settled: tolerance.anodeVolts, nearZero: limits.readBack.anodeVolts }
  const coils = { settled: tolerance.coilAmps, nearZero: limits.readBack.coilAmps }
  const ohms = coilResistance.ohms
  return {
    heaterVolts: { settled: tolerance.heaterVolts, nearZero: 0.1 },
    heaterAmps: { settled: 0.02, nearZero: 0.02 },
    anodeVolts: anode,
    anodeSupplyVolts: anode,
    anodeAmps: { settled: limits.anodeAmps * 0.02, nearZero: limits.anodeAmps * 0.02 },
    coilAmps: coils,
    coilSupplyAmps: coils,
    coilVolts: {
      settled: tolerance.coilAmps * ohms + limits.coilAmps * ohms * 0.004 * tolerance.coilCelsius,
      nearZero: coils.nearZero * ohms,
    },
    coilCelsius: { settled: tolerance.coilCelsius, nearZero: 0 },
  }
}

/** Each channel's state: off with its output off and nothing measured, else as its window says. */
export class ChannelStatuses {
  readonly #tolerances: Record<Channel, Tolerance>
  readonly #watches: Record<Channel, ChannelWatch>
  readonly #changedAt: Partial<Record<Output, number>> = {}

  constructor(config: BenchConfig) {
    this.#tolerances = tolerances(config)
    this.#watches = Object.fromEntries(
      channels.map((channel) => [
        channel,
        new ChannelWatch(
          {
            windowSeconds: config.window.seconds,
            holdSeconds: config.window.holdSeconds,
            toleranceDeviation: this.#tolerances[channel].settled,
            toleranceDrift: this.#tolerances[channel].settled,
          },
          (difference) => differenceInWords(channel, difference),
        ),
      ]),
    ) as Record<Channel, ChannelWatch>
  }

  add(at: number, values: ChannelValues, outputs: Readonly<Record<Output, OutputView>>): void {
    this.#follow(outputs)
    for (const channel of channels) this.#watches[channel].add(at, values[channel])
  }

  /** A window never reaches back across a change of its output: what was settled before says nothing of now. */
  #follow(outputs: Readonly<Record<Output, OutputView>>): void {
    for (const channel of channels) {
      const output = outputOf[channel]
      if (output !== null && outputs[output].changedAt !== this.#changedAt[output])
        this.#watches[channel].reset()
    }
    for (const output of outputNames) this.#changedAt[output] = outputs[output].changedAt
  }

  status(
    channel: Channel,
    now: number,
    values: ChannelValues,
    outputs: Readonly<Record<Output, OutputView>>,
  ): ChannelStatus {
    this.#follow(outputs)
    const { state, reason, mean, standardDeviation, driftPerSecond } = this.#watches[channel].status(now)
    const output = outputOf[channel]
    const value = values[channel]
    if (mean === null && value !== null)
      return {
        state: 'settling',
        reason: 'its setpoint has just changed',
        mean,
        standardDeviation,
        driftPerSecond,
      }
    if (
      output !== null &&
      !outputs[output].on &&
      value !== null &&
      state !== 'stale' &&
      Math.abs(value) <= this.#tolerances[channel].nearZero
    ) {
      return { state: 'off', reason: 'output off', mean, standardDeviation, driftPerSecond }
    }
    return { state, reason, mean, standardDeviation, driftPerSecond }
  }

  all(
    now: number,
    values: ChannelValues,
    outputs: Readonly<Record<Output, OutputView>>,
  ): Record<Channel, ChannelStatus> {
    return Object.fromEntries(
      channels.map((channel) => [channel, this.status(channel, now, values, outputs)]),
    ) as Record<Channel, ChannelStatus>
  }
}
