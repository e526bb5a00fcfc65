import { href, Link } from 'react-router'
import { readForm } from '../../auth/request-body.server.ts'
import { answer } from '../../benches/answer.server.ts'
import { answerAlways } from '../../benches/answer-always.ts'
import { ImportedFile } from '../../components/import/imported-file.tsx'
import { ImportedReadings } from '../../components/import/imported-readings.tsx'
import { LocalTime } from '../../components/local-time.tsx'
import { PageFrame } from '../../components/page-frame.tsx'
import { RunsLink } from '../../components/runs-link.tsx'
import { databaseContext, personContext } from '../../context.ts'
import { loadImportedRun, strikeImported } from '../../imports/imported-run.server.ts'
import type { Route } from './+types/imported'

export const loader = ({ params, context }: Route.LoaderArgs) =>
  loadImportedRun(context.get(databaseContext), { ...params, person: context.get(personContext) })

/** Strikes one of its readings. */
export async function action({ request, params, context }: Route.ActionArgs) {
  const answered = await strikeImported(context.get(databaseContext), {
    ...params,
    person: context.get(personContext),
    form: await readForm(request),
  })
  return answer(request, answered, href('/runs/:runId/imported', params))
}

export const clientAction = ({ serverAction }: Route.ClientActionArgs) => answerAlways({ serverAction })

export default function Imported({ loaderData: view }: Route.ComponentProps) {
  const { run, bench, file } = view
  return (
    <PageFrame where={<RunsLink />}>
      <title>{`${file.fileName} · Coilside`}</title>
      <div className="grid max-w-5xl grid-cols-[minmax(0,1fr)] gap-6 pb-10">
        <header className="grid gap-1">
          <h1 className="text-xl font-bold wrap-anywhere">Readings imported from {file.fileName}</h1>
          <p className="text-ink-soft">
            By {run.isMine ? 'you' : run.by}, <LocalTime iso={run.at} parts="date and time" />, for{' '}
            {bench ? (
              <Link to={href('/benches/:benchId', { benchId: bench.id })} className="link">
                {bench.name}
              </Link>
            ) : (
              'a field of its own'
            )}
            .{' '}
            <Link to={href('/runs/:runId/analysis', { runId: run.id })} className="link text-ink">
              To the analysis
            </Link>
          </p>
        </header>
        <ImportedReadings view={view} />
        <ImportedFile file={file} revision={view.readings[0]?.revision ?? null} />
      </div>
    </PageFrame>
  )
}
