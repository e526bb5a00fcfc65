import { requireVisibleBench, toFramed } from '../../benches/visible-benches.server.ts'
import { Section } from '../../components/analysis/section.tsx'
import { BenchFrame } from '../../components/bench-frame.tsx'
import { ChannelStability } from '../../components/stability/channel-stability.tsx'
import { CoilForecast } from '../../components/stability/coil-forecast.tsx'
import { databaseContext, personContext } from '../../context.ts'
import type { Route } from './+types/stability'

export async function loader({ params, context }: Route.LoaderArgs) {
  const person = context.get(personContext)
  const bench = await requireVisibleBench(context.get(databaseContext), { benchId: params.benchId, person })
  const { config } = bench
  return {
    bench: toFramed(bench),
    config: config.instruments === null ? null : config,
    person: { id: person.id, role: person.role },
  }
}

export default function StabilityOfBench({ loaderData: { bench, config, person } }: Route.ComponentProps) {
  return (
    <BenchFrame bench={bench} person={person}>
      <title>{`Stability · ${bench.name} · Coilside`}</title>
      <div className="grid max-w-4xl grid-cols-1 gap-5">
        <h1 className="text-xl font-bold">Stability of {bench.name}</h1>
        {config ? (
          <>
            <Section id="averaging" title="How long to average">
              <ChannelStability benchId={bench.id} />
            </Section>
            <Section id="forecast" title="Where the coils' temperature goes">
              <CoilForecast config={config} />
            </Section>
          </>
        ) : (
          <p className="max-w-prose">
            This bench has no instruments that record: nothing can be told of its stability here.
          </p>
        )}
      </div>
    </BenchFrame>
  )
}
