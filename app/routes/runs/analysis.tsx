import { href, Link } from 'react-router'
import * as z from 'zod'
import { SeriesPlot } from '../../charts/static/series-plot.tsx'
import { Budget } from '../../components/analysis/budget.tsx'
import { Diagnosis } from '../../components/analysis/diagnosis.tsx'
import { FitsTable } from '../../components/analysis/fits-table.tsx'
import { MonteCarlo } from '../../components/analysis/monte-carlo.tsx'
import { Section } from '../../components/analysis/section.tsx'
import { SeriesTable } from '../../components/analysis/series-table.tsx'
import { Statement } from '../../components/analysis/statement.tsx'
import { LocalTime } from '../../components/local-time.tsx'
import { RunFrame } from '../../components/run-frame.tsx'
import { databaseContext, personContext } from '../../context.ts'
import { loadAnalysis } from '../../runs/analysis.server.ts'
import { lines, methods } from '../../runs/fits.ts'
import type { Route } from './+types/analysis'

const drawnSchema = z.object({
  line: z.enum(lines).catch('intercept'),
  method: z.enum(methods).catch('both-errors'),
})

export async function loader({ request, params, context }: Route.LoaderArgs) {
  const person = context.get(personContext)
  const drawn = drawnSchema.parse(Object.fromEntries(new URL(request.url).searchParams))
  const view = await loadAnalysis(context.get(databaseContext), { ...params, person, ...drawn })
  return { view, person: { id: person.id, role: person.role } }
}

export default function Analysis({ loaderData: { view, person } }: Route.ComponentProps) {
  const { run, plot } = view
  const name = run.bench?.name ?? run.fileName ?? 'a run'
  return (
    <RunFrame bench={run.bench} person={person}>
      <title>{`Analysis · ${name} · Coilside`}</title>
      <div
        className={`grid max-w-7xl grid-cols-1 gap-6 ${view.isRealBench ? 'dark:[--beam:var(--ink)]' : ''}`}
      >
        <header className="grid gap-1">
          <h1 className="text-xl font-bold">Analysis of a run</h1>
          <p className="text-ink-soft">
            {run.by}, {run.fileName ? 'imported for ' : 'on '}
            {run.bench?.name ?? 'a field of its own'}, <LocalTime iso={run.startedAt} parts="date and time" />
            .{' '}
            {run.fileName ? (
              <Link to={href('/runs/:runId/imported', { runId: run.id })} className="link">
                To the file
              </Link>
            ) : (
              run.bench && (
                <Link to={href('/benches/:benchId', { benchId: run.bench.id })} className="link">
                  To the bench
                </Link>
              )
            )}
          </p>
        </header>
        <Section id="result" title="Result">
          <Statement view={view} />
        </Section>
        <Section id="diagnosis" title="What shifts it">
          <Diagnosis view={view} />
        </Section>
        <Section id="series" title="The readings">
          <SeriesTable rows={view.rows} mean={view.mean} />
        </Section>
        {plot && (
          <Section id="fits" title="Lines through the readings">
            <div className="grid grid-cols-1 items-start gap-6 xl:grid-cols-[minmax(0,5fr)_minmax(0,6fr)]">
              <SeriesPlot
                key={`${plot.line} ${plot.method}`}
                points={plot.points}
                line={plot.curve}
                x={plot.x}
                y={plot.y}
                caption={plot.caption}
                fileName={`${run.bench?.id ?? 'imported'}-${plot.line}`}
              />
              <FitsTable fits={view.fits} plot={plot} />
            </div>
          </Section>
        )}
        {view.budget.length > 0 && (
          <Section id="budget" title="Uncertainty budget">
            <Budget rows={view.budget} />
          </Section>
        )}
        {view.monteCarlo && (
          <Section id="monte-carlo" title="The same by Monte Carlo">
            <MonteCarlo problem={view.monteCarlo} runNumber={run.bench?.id ?? 'imported'} />
          </Section>
        )}
      </div>
    </RunFrame>
  )
}
