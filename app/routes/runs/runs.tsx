import { href, Link } from 'react-router'
import * as z from 'zod'
import { may } from '../../auth/capabilities.ts'
import { LocalTime } from '../../components/local-time.tsx'
import { PageFrame } from '../../components/page-frame.tsx'
import { databaseContext, personContext } from '../../context.ts'
import { listRuns, type RunRow } from '../../runs/run-list.server.ts'
import type { Route } from './+types/runs'

const pageLength = 40
const pageSchema = z.coerce.number().int().min(1).max(100_000).catch(1)

export async function loader({ request, context }: Route.LoaderArgs) {
  const person = context.get(personContext)
  const page = pageSchema.parse(new URL(request.url).searchParams.get('page') ?? 1)
  // One more than is shown tells whether there is an older page.
  const runs = await listRuns(context.get(databaseContext), {
    person,
    limit: pageLength + 1,
    offset: (page - 1) * pageLength,
  })
  return {
    page,
    runs: runs.slice(0, pageLength),
    hasOlder: runs.length > pageLength,
    isStaff: may(person.role, 'read-runs'),
    mayImport: may(person.role, 'import-readings'),
  }
}

export default function Runs({ loaderData }: Route.ComponentProps) {
  const { page, runs, hasOlder, isStaff, mayImport } = loaderData
  return (
    <PageFrame where={<b className="font-medium">Runs</b>}>
      <title>Runs · Coilside</title>
      <div className="grid max-w-5xl gap-4">
        <header className="flex flex-wrap items-center justify-between gap-x-6 gap-y-3">
          <h1 className="text-xl font-bold">{isStaff ? 'Runs' : 'My runs'}</h1>
          {mayImport && (
            <Link to={href('/runs/import')} className="button">
              Import readings
            </Link>
          )}
        </header>
        {runs.length === 0 ? <Empty page={page} isStaff={isStaff} /> : <Table runs={runs} />}
        <nav aria-label="Pages of the runs" className="flex gap-3">
          {page > 1 && (
            <Link to={`?page=${page - 1}`} className="button">
              Newer
            </Link>
          )}
          {hasOlder && (
            <Link to={`?page=${page + 1}`} className="button">
              Older
            </Link>
          )}
        </nav>
      </div>
    </PageFrame>
  )
}

function Empty({ page, isStaff }: { page: number; isStaff: boolean }) {
  if (page > 1) return <p className="text-ink-soft">There are no older runs.</p>
  return (
    <p className="max-w-prose">
      {isStaff ? 'Nobody has taken a reading yet.' : 'You have taken no reading yet.'} A run begins with its
      first reading:{' '}
      <Link to={href('/hall')} className="link">
        choose a bench
      </Link>
      , or import readings from a file.
    </p>
  )
}

/** A table; on a phone each run is a block of lines. */
function Table({ runs }: { runs: RunRow[] }) {
  const head = 'py-2 pr-6 font-medium'
  const cell = 'py-2 pr-6 align-top max-sm:block max-sm:p-0'
  return (
    <table className="w-full border-collapse text-left max-sm:block">
      <thead className="text-[12.5px] text-ink-soft max-sm:sr-only">
        <tr className="border-b border-edge">
          <th scope="col" className={head}>
            Begun
          </th>
          <th scope="col" className={head}>
            By
          </th>
          <th scope="col" className={head}>
            Bench
          </th>
          <th scope="col" className={head}>
            Readings
          </th>
          <th scope="col" className="py-2 font-medium">
            <span className="sr-only">To look at</span>
          </th>
        </tr>
      </thead>
      <tbody className="max-sm:block">
        {runs.map((run) => (
          <tr key={run.id} className="border-b border-rule max-sm:block max-sm:py-2">
            <td className={`${cell} whitespace-nowrap`}>
              <LocalTime iso={run.startedAt} parts="date and time" />
            </td>
            <td className={cell}>{run.isMine ? 'you' : run.by}</td>
            <td className={`${cell} wrap-anywhere`}>
              {run.bench?.name ?? 'a field of its own'}
              {run.fileName && <span className="text-ink-soft"> · imported from {run.fileName}</span>}
            </td>
            <td className={cell}>{readingWords(run)}</td>
            <td className={`${cell} pr-0`}>
              <span className="flex flex-wrap gap-x-5">
                <Link to={href('/runs/:runId/analysis', { runId: run.id })} className="link-alone">
                  analysis
                </Link>
                {run.fileName && (
                  <Link to={href('/runs/:runId/imported', { runId: run.id })} className="link-alone">
                    file
                  </Link>
                )}
              </span>
            </td>
          </tr>
        ))}
      </tbody>
    </table>
  )
}

function readingWords({ readings, struck, withDiameter }: RunRow): string {
  const standing = readings - struck
  return [
    `${readings} ${readings === 1 ? 'reading' : 'readings'}`,
    withDiameter === standing ? 'e/m of each' : `e/m of ${withDiameter}`,
    ...(struck > 0 ? [`${struck} struck`] : []),
  ].join(', ')
}
