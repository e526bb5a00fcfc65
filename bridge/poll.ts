import { type ChannelValues, channels } from '#app/safety/types.ts'
import type { Clock } from './clock.ts'
import { within } from './clock.ts'
import type { CoilThermometer } from './coil-thermometer.ts'
import type { InstrumentSet } from './instrument-set.ts'
import type { InterlockReading, SupplyReading } from './instruments/types.ts'

/** The bench is watched at least this fast, whatever rate it records with: the detection times rest on it. */
export const leastHertz = 10
const interlockSeconds = 0.05
/** An answer that takes longer misses its sample, which then says that there was none. */
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
  const supply = oneAtATime(() => instruments.supply.measure())
  const anodeMeter = oneAtATime(() => instruments.anodeMeter.measure())
  const coilMeter = oneAtATime(() => instruments.coilMeter.measure())
  const interlock = oneAtATime(() => instruments.interlock.measure())
  let isStopped = false
  let published: Promise<void> = Promise.resolve()

  const round = () => {
    const at = clock.now()
    const readings = Promise.all([
      within(roundSeconds, supply(), null),
      within(roundSeconds, anodeMeter(), null),
      within(roundSeconds, coilMeter(), null),
    ])
    // A slow round must not be overtaken by the next one.
    published = Promise.all([published, readings]).then(([, [supplyReading, anodeVolts, coilAmps]]) => {
      if (isStopped) return
      options.onSample(at, valuesOf(at, supplyReading, anodeVolts, coilAmps, options.thermometer))
    })
  }
  const askInterlock = async () => {
    const reading = await interlock()
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

/** The question as one that is not put again before it is answered; null meanwhile, and when it fails. */
function oneAtATime<T>(ask: () => Promise<T | null>): () => Promise<T | null> {
  let isAsking = false
  return async () => {
    if (isAsking) return null
    isAsking = true
    try {
      return await ask()
    } catch {
      // A line that does not answer is told by its status; here it is a sample without a reading.
      return null
    } finally {
      isAsking = false
    }
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
  return {
    heaterVolts: supply?.heater.volts ?? null,
    heaterAmps: supply?.heater.amps ?? null,
    anodeVolts,
    anodeSupplyVolts: supply?.anode.volts ?? null,
    anodeAmps: supply?.anode.amps ?? null,
    coilAmps,
    coilSupplyAmps,
    coilVolts,
    coilCelsius: thermometer.read(at, coilVolts, coilSupplyAmps),
  }
}
