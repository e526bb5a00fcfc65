import { predictCoilTemperature } from '#app/physics/coil-heating.ts'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import { age } from '../figures.ts'

/** What of a bench a forecast rests on. */
export type ForecastBench = Pick<BenchConfig, 'coilThermal' | 'coilResistance'> & {
  limits: Pick<BenchConfig['limits'], 'coilCelsius'>
}

export type Forecast = {
  sentences: string[]
  /** Temperatures that the coils come to on their way up, and in how long. */
  steps: { celsius: number; seconds: number }[]
}

const stepCelsius = 5
/** Nearer to the end it takes as long as one likes to wait. */
const nearestToSteady = 0.5

/** Where the coils' temperature goes at the current of now, and when it gets to its limit. */
export function forecastCoils(
  { coilThermal, coilResistance, limits }: ForecastBench,
  { celsius, amps }: { celsius: number; amps: number },
): Forecast {
  const at = (limitCelsius: number) =>
    predictCoilTemperature({
      temperatureCelsius: celsius,
      currentAmps: Math.abs(amps),
      referenceOhms: coilResistance.ohms,
      referenceCelsius: coilResistance.celsius,
      limitCelsius,
      ...coilThermal,
    })
  const limit = limits.coilCelsius
  const { steadyCelsius, secondsToLimit } = at(limit)
  const highest = Math.min(limit, (steadyCelsius ?? limit) - nearestToSteady)
  const steps: Forecast['steps'] = []
  for (let step = Math.floor(celsius / stepCelsius + 1) * stepCelsius; step < highest; step += stepCelsius) {
    const seconds = at(step).secondsToLimit
    if (seconds !== null) steps.push({ celsius: step, seconds })
  }
  if (secondsToLimit) steps.push({ celsius: limit, seconds: secondsToLimit })
  return {
    sentences: [
      `The coils have ${celsius.toFixed(1)} °C at ${Math.abs(amps).toFixed(2)} A.`,
      steadyCelsius === null
        ? 'At this current they would heat without end.'
        : `At this current they come to ${steadyCelsius.toFixed(0)} °C in the end.`,
      limitSentence(limit, secondsToLimit),
    ],
    steps,
  }
}

function limitSentence(limit: number, seconds: number | null): string {
  if (seconds === null) return `The limit of ${limit} °C is not reached.`
  return seconds === 0
    ? `They are at the limit of ${limit} °C or above it.`
    : `The limit of ${limit} °C is reached in ${age(seconds)}.`
}
