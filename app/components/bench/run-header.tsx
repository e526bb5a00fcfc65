import { href, useFetcher } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import type { BenchView } from '#app/benches/bench-view.server.ts'
import { AnswerLine } from '../answer-line.tsx'

/** Which run the readings below belong to, and the button that begins another. */
export function RunHeader({ view }: { view: BenchView }) {
  const fetcher = useFetcher<ActionReply>()
  const { run } = view
  return (
    <header className="flex flex-wrap items-center justify-between gap-x-5 gap-y-2">
      <h2 className="font-medium">
        {run ? (
          <>
            Run of {run.by}{' '}
            <span className="font-normal text-ink-soft">
              since <time dateTime={run.startedAt}>{shortTime(run.startedAt)}</time>
            </span>
          </>
        ) : (
          'No run yet'
        )}
      </h2>
      <div className="flex flex-wrap items-center gap-3">
        <AnswerLine reply={fetcher.data} className="text-[12.5px] text-ink-soft" />
        <fetcher.Form method="post" action={href('/benches/:benchId/runs', { benchId: view.bench.id })}>
          <button type="submit" className="button" disabled={fetcher.state !== 'idle'}>
            Start a new run
          </button>
        </fetcher.Form>
      </div>
    </header>
  )
}

/** '2026-12-01 14:05' in UTC, alike on server and browser. */
export function shortTime(iso: string): string {
  return `${iso.slice(0, 10)} ${iso.slice(11, 16)} UTC`
}
