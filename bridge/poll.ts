import { type ChannelValues, channels } from '#app/safety/types.ts'
import type { Clock } from './clock.ts'
import { within } from './clock.ts'
import type { CoilThermometer } from './coil-thermometer.ts'
import type { InstrumentSet } from './instrument-set.ts'
import type { InterlockReading, SupplyReading } from './instruments/types.ts'

/** The bench is watched at least this fast, whatever rate it records with: the detection times rest on it. */
export const leastHertz = 10
const interlockSeconds = 0.05
/** An answer that takes longer misses its sample and goes with the next one. */
const longestRoundSeconds = 0.1

export const noValues = (): ChannelValues =>
  Object.fromEntries(channels.map((channel) => [channel, null])) as ChannelValues

type PollOptions = {
  instruments: InstrumentSet
  hertz: number
  clock: Clock
  thermometer: CoilThermometer
  onSample: (at: number, values: ChannelValues) => void
  onInterlock: (reading: InterlockReading, at: number) => void
}

/** Asks all instruments for each sample at once, and the interlock unit more often by itself. Returns what ends it. */
export function startPolling(options: PollOptions): () => void {
  const { instruments, clock } = options
  const period = 1 / options.hertz
  const roundSeconds = Math.max(period, longestRoundSeconds)
  const supply = answersTo(() => instruments.supply.measure())
  const anodeMeter = answersTo(() => instruments.anodeMeter.measure())
  const coilMeter = answersTo(() => instruments.coilMeter.measure())
  const interlock = answersTo(() => instruments.interlock.measure())
  let isStopped = false
  let published: Promise<void> = Promise.resolve()

  const round = () => {
    const at = rounded(clock.now(), 4)
    const readings = Promise.all([supply(roundSeconds), anodeMeter(roundSeconds), coilMeter(roundSeconds)])
    // A slow round must not be overtaken by the next one.
    published = Promise.all([published, readings]).then(([, [supplyReading, anodeVolts, coilAmps]]) => {
      if (isStopped) return
      options.onSample(at, valuesOf(at, supplyReading, anodeVolts, coilAmps, options.thermometer))
    })
  }
  const askInterlock = async () => {
    const reading = await interlock(interlockSeconds)
    if (reading !== null && !isStopped) options.onInterlock(reading, clock.now())
  }
  const timers = [
    setInterval(round, period * 1000),
    setInterval(() => void askInterlock(), interlockSeconds * 1000),
  ]
  return () => {
    isStopped = true
    for (const timer of timers) clearInterval(timer)
  }
}

/**
 * Puts a question, and gives its answer once: to the round that asked, or, when it came late, to the next one. Null
 * for a round without an answer of its own; an old answer is never repeated.
 */
function answersTo<T>(ask: () => Promise<T | null>): (seconds: number) => Promise<T | null> {
  let asking: Promise<void> | null = null
  const answers: (T | null)[] = []
  return async (seconds) => {
    if (answers.length === 0) {
      // A line that does not answer is told by its status; here it is a sample without a reading.
      asking ??= ask()
        .catch(() => null)
        .then((value) => {
          answers.push(value)
          asking = null
        })
      await within(seconds, asking, undefined)
    }
    return answers.shift() ?? null
  }
}

function valuesOf(
  at: number,
  supply: SupplyReading | null,
  anodeVolts: number | null,
  coilAmps: number | null,
  thermometer: CoilThermometer,
): ChannelValues {
  const coilVolts = supply?.coils.volts ?? null
  const coilSupplyAmps = supply?.coils.amps ?? null
  const celsius = thermometer.read(at, coilVolts, coilSupplyAmps)
  return {
    heaterVolts: supply?.heater.volts ?? null,
    heaterAmps: supply?.heater.amps ?? null,
    anodeVolts,
    anodeSupplyVolts: supply?.anode.volts ?? null,
    anodeAmps: supply?.anode.amps ?? null,
    coilAmps,
    coilSupplyAmps,
    coilVolts,
    coilCelsius: celsius === null ? null : rounded(celsius, 3),
  }
}

/** Fewer digits make shorter messages. */
const rounded = (value: number, decimals: number): number => Number(value.toFixed(decimals))
