import type { BenchConfig } from '#app/protocol/bench-config.ts'
import { useLatest } from '#app/telemetry/telemetry.tsx'
import { age } from '../figures.ts'
import { forecastCoils } from './forecast.ts'

/** Where the coils' temperature goes at the current of now, and when it gets to its limit. */
export function CoilForecast({ config }: { config: BenchConfig }) {
  const celsius = useLatest(config.benchId, 'coilCelsius')?.value ?? null
  const amps = useLatest(config.benchId, 'coilAmps')?.value ?? null
  if (celsius === null || amps === null)
    return <p className="text-ink-soft">Current and temperature of the coils are not known now.</p>
  const { sentences, steps } = forecastCoils(config, { celsius, amps })
  return (
    <>
      <p className="max-w-prose">
        {sentences.join(' ')}{' '}
        <span className="text-ink-soft">
          By the bench’s resistance, cooling and time constant: a forecast, not a measurement.
        </span>
      </p>
      {steps.length > 0 && (
        <table className="w-fit border-collapse text-right">
          <caption className="sr-only">When the coils come to which temperature</caption>
          <thead>
            <tr className="border-b border-ink text-[12.5px] text-ink-soft">
              <th scope="col" className="py-1.5 pr-6 text-left font-normal">
                coils °C
              </th>
              <th scope="col" className="font-normal">
                in
              </th>
            </tr>
          </thead>
          <tbody>
            {steps.map((step) => (
              <tr key={step.celsius} className="border-b border-rule">
                <th scope="row" className="py-1 pr-6 text-left font-normal">
                  {step.celsius}
                  {step.celsius === config.limits.coilCelsius && (
                    <span className="text-ink-soft"> limit</span>
                  )}
                </th>
                <td>{age(step.seconds)}</td>
              </tr>
            ))}
          </tbody>
        </table>
      )}
    </>
  )
}
