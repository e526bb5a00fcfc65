import { href, Link, useFetcher } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import type { BenchView, TypedBenchView } from '#app/benches/bench-view.server.ts'
import { AnswerLine } from '../answer-line.tsx'
import { LocalTime } from '../local-time.tsx'

/** Which run the readings below belong to, and the button that begins another. */
export function RunHeader({ view }: { view: BenchView | TypedBenchView }) {
  const fetcher = useFetcher<ActionReply>()
  const { run } = view
  return (
    <header className="flex flex-wrap items-center justify-between gap-x-5 gap-y-2">
      <h2 className="font-medium">
        {run ? (
          <>
            Run of {run.by}{' '}
            <span className="font-normal text-ink-soft">
              since <LocalTime iso={run.startedAt} parts="date and time" />
            </span>
          </>
        ) : (
          'No run yet'
        )}
      </h2>
      <div className="flex flex-wrap items-center justify-end gap-x-3">
        <Link to={href('/benches/:benchId/planner', { benchId: view.bench.id })} className="link-alone">
          Planner
        </Link>
        <Link to={href('/benches/:benchId/relation', { benchId: view.bench.id })} className="link-alone">
          Relation
        </Link>
        {run && view.readings.length > 0 && (
          <Link to={href('/runs/:runId/analysis', { runId: run.id })} className="link-alone">
            Analysis of this run
          </Link>
        )}
        <fetcher.Form method="post" action={href('/benches/:benchId/runs', { benchId: view.bench.id })}>
          <button type="submit" className="button" disabled={fetcher.state !== 'idle'}>
            Start a new run
          </button>
        </fetcher.Form>
        <AnswerLine reply={fetcher.data} className="text-[12.5px] text-ink-soft" />
      </div>
    </header>
  )
}
