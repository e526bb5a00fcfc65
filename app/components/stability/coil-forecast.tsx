import { predictCoilTemperature } from '#app/physics/coil-heating.ts'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import { useLatest } from '#app/telemetry/telemetry.tsx'
import { age } from '../figures.ts'

/** Where the coils' temperature goes at the current of now, and when it gets to its limit. */
export function CoilForecast({ config }: { config: BenchConfig }) {
  const celsius = useLatest(config.benchId, 'coilCelsius')?.value ?? null
  const amps = useLatest(config.benchId, 'coilAmps')?.value ?? null
  const limit = config.limits.coilCelsius
  if (celsius === null || amps === null)
    return <p className="text-ink-soft">Current and temperature of the coils are not known now.</p>
  const { steadyCelsius, secondsToLimit } = predictCoilTemperature({
    temperatureCelsius: celsius,
    ambientCelsius: config.coilThermal.ambientCelsius,
    currentAmps: Math.abs(amps),
    referenceOhms: config.coilResistance.ohms,
    referenceCelsius: config.coilResistance.celsius,
    kelvinPerWatt: config.coilThermal.kelvinPerWatt,
    timeConstantSeconds: config.coilThermal.timeConstantSeconds,
    limitCelsius: limit,
  })
  return (
    <p className="max-w-prose">
      The coils have {celsius.toFixed(1)} °C at {Math.abs(amps).toFixed(2)} A.{' '}
      {steadyCelsius === null
        ? 'At this current they would heat without end.'
        : `At this current they come to ${steadyCelsius.toFixed(0)} °C in the end.`}{' '}
      {secondsToLimit === null
        ? `The limit of ${limit} °C is not reached.`
        : `The limit of ${limit} °C is reached in ${age(secondsToLimit)}.`}{' '}
      <span className="text-ink-soft">
        By the bench’s resistance, cooling and time constant: a forecast, not a measurement.
      </span>
    </p>
  )
}
