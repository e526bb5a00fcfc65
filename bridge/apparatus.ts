import type { BenchConfig } from '#app/protocol/bench-config.ts'
import type { Samples } from '#app/protocol/messages.ts'
import { type Channel, type ChannelValues, channels } from '#app/safety/types.ts'
import type { SafetyConfig } from '#app/safety/view.ts'
import { ChannelStatuses } from './channel-statuses.ts'
import type { Clock } from './clock.ts'
import { CoilThermometer } from './coil-thermometer.ts'
import { createInstrumentSet, type InstrumentSet, instrumentWords } from './instrument-set.ts'
import type { OpenPort } from './instruments/open-port.ts'
import type { InterlockReading } from './instruments/types.ts'
import { Outputs } from './outputs.ts'
import { leastHertz, noValues, startPolling } from './poll.ts'
import { Recorder, type UnnumberedSummary } from './recorder.ts'
import { SampleRing } from './sampler.ts'

const batchSeconds = 0.05

type ApparatusOptions = {
  config: BenchConfig
  openPort: OpenPort
  clock: Clock
  wallOf: (at: number) => number
  onSample: () => void
  onSamples: (samples: Samples) => void
  onSecond: (summaries: UnnumberedSummary[]) => void
  onInterlock: () => void
  onChange: () => void
  onLine: (instrument: string, isOpen: boolean, reason: string | null) => void
}

/** One revision of a bench's instruments with all that is measured on them, from opening the ports to closing them. */
export class Apparatus {
  readonly config: BenchConfig
  readonly safety: SafetyConfig
  readonly instruments: InstrumentSet
  readonly outputs: Outputs
  readonly ring: SampleRing
  readonly statuses: ChannelStatuses
  readonly hertz: number
  prepared = false
  /** How often the supply's line has been opened: what was prepared on a former one counts for nothing. */
  supplyOpenings = 0
  values: ChannelValues = noValues()
  readonly lastGoodAt: Record<Channel, number | null> = noValues()
  interlock: InterlockReading | null = null
  interlockAt: number | null = null
  anodeMeasured: { volts: number; at: number } | null = null
  readonly #options: ApparatusOptions
  readonly #recorder: Recorder
  #stopPolling: (() => void) | null = null
  #sentUpTo = 0
  #isClosed = false

  /** Throws a RangeError for a profile name that is none. */
  constructor(options: ApparatusOptions) {
    const { config, clock } = options
    this.#options = options
    this.config = config
    this.hertz = Math.max(leastHertz, config.sampleHertz)
    this.instruments = createInstrumentSet(config, options.openPort)
    this.safety = {
      limits: config.limits,
      ranges: this.instruments.ranges,
      coilsReversible: config.reversal !== 'not',
    }
    this.outputs = new Outputs({
      clock,
      instruments: this.instruments,
      limits: config.limits,
      values: () => this.values,
      onChange: options.onChange,
    })
    this.ring = new SampleRing(this.hertz)
    this.statuses = new ChannelStatuses(config)
    this.#recorder = new Recorder(config.benchId, options.onSecond)
    for (const instrument of this.instruments.all) {
      instrument.onStatus((status, reason) => {
        if (this.#isClosed || status === 'opening' || status === 'closed') return
        if (status === 'lost') this.#forget(instrument.name)
        else if (instrument === this.instruments.supply) this.supplyOpenings++
        options.onLine(instrument.name, status === 'open', reason)
      })
    }
  }

  open(): void {
    this.#stopPolling = startPolling({
      instruments: this.instruments,
      hertz: this.hertz,
      clock: this.#options.clock,
      thermometer: new CoilThermometer(this.config),
      onSample: (at, values) => this.#take(at, values),
      onInterlock: (reading, at) => {
        this.interlock = reading
        this.interlockAt = at
        this.#options.onInterlock()
      },
    })
    for (const instrument of this.instruments.all) instrument.open()
  }

  async close(): Promise<void> {
    this.#isClosed = true
    this.#stopPolling?.()
    this.#recorder.flush()
    this.outputs.drop([])
    await Promise.all(this.instruments.all.map((instrument) => instrument.close()))
  }

  #take(at: number, values: ChannelValues): void {
    this.values = values
    for (const channel of channels) if (values[channel] !== null) this.lastGoodAt[channel] = at
    // Of two that disagree the higher one is what has to be feared.
    const volts = [values.anodeVolts, values.anodeSupplyVolts].filter((value) => value !== null)
    if (volts.length > 0) this.anodeMeasured = { volts: Math.max(...volts), at }
    this.ring.push(at, values)
    this.statuses.add(at, values, this.outputs.views)
    this.#recorder.add(this.#options.wallOf(at), values)
    this.#options.onSample()
    const { next } = this.ring
    if (this.hertz <= 1 / batchSeconds || at - this.ring.time(this.#sentUpTo) >= batchSeconds) {
      this.#options.onSamples(this.ring.message(this.config.benchId, this.#sentUpTo, next))
      this.#sentUpTo = next
    }
  }

  /** What a lost line leaves unknown. */
  #forget(instrument: string): void {
    if (instrument === 'interlock') this.interlock = null
    if (instrument === 'supply') this.prepared = false
    if (instrument === 'supply' || instrument === 'anode-meter') this.anodeMeasured = null
  }
}

export const lineWords = (instrument: string): string => instrumentWords[instrument] ?? instrument
