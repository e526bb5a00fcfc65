import { href, Link } from 'react-router'
import * as z from 'zod'
import { findBenchLog, type LogEntry } from '../../benches/bench-log.server.ts'
import { requireVisibleBench } from '../../benches/visible-benches.server.ts'
import { PageFrame } from '../../components/page-frame.tsx'
import { databaseContext, personContext } from '../../context.ts'
import type { Route } from './+types/log'

const pageLength = 50
const pageSchema = z.coerce.number().int().min(1).max(100_000).catch(1)

export async function loader({ request, params, context }: Route.LoaderArgs) {
  const db = context.get(databaseContext)
  const person = context.get(personContext)
  const { id, name, place } = await requireVisibleBench(db, { benchId: params.benchId, person })
  const page = pageSchema.parse(new URL(request.url).searchParams.get('page') ?? 1)
  // One entry more than is shown tells whether there is an older page.
  const entries = await findBenchLog(db, {
    benchId: id,
    reader: person,
    limit: pageLength + 1,
    offset: (page - 1) * pageLength,
  })
  return {
    bench: { id, name, place },
    page,
    entries: entries.slice(0, pageLength),
    hasOlder: entries.length > pageLength,
  }
}

export default function Log({ loaderData }: Route.ComponentProps) {
  const { bench, page, entries, hasOlder } = loaderData
  const benchPage = href('/benches/:benchId', { benchId: bench.id })
  return (
    <PageFrame
      where={
        <Link to={benchPage}>
          <b className="font-medium">{bench.name}</b> <span className="text-ink-soft">{bench.place}</span>
        </Link>
      }
    >
      <title>{`Log · ${bench.name} · Coilside`}</title>
      <div className="grid max-w-6xl gap-4">
        <h1 className="text-xl font-bold">Log of {bench.name}</h1>
        {entries.length === 0 ? <Empty page={page} benchPage={benchPage} /> : <Entries entries={entries} />}
        <nav aria-label="Pages of the log" className="flex gap-3">
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

function Empty({ page, benchPage }: { page: number; benchPage: string }) {
  return (
    <p className="text-ink-soft">
      {page > 1 ? 'Nothing older is noted.' : 'Nothing has happened here yet. What is asked of this bench'}
      {page > 1 ? null : (
        <>
          {' '}
          and what it does is noted from the first command on.{' '}
          <Link to={benchPage} className="link text-ink">
            To the bench
          </Link>
        </>
      )}
    </p>
  )
}

const outcomeWords = { accepted: 'done', refused: 'refused', unanswered: 'no answer' } as const

function Entries({ entries }: { entries: LogEntry[] }) {
  return (
    <div className="overflow-x-auto">
      <table className="w-full min-w-xl border-collapse text-left">
        <thead className="text-[12.5px] text-ink-soft">
          <tr className="border-b border-edge">
            <th className="py-2 pr-6 font-medium">When (UTC)</th>
            <th className="py-2 pr-6 font-medium">Who</th>
            <th className="py-2 pr-6 font-medium">What</th>
            <th className="py-2 font-medium">Outcome</th>
          </tr>
        </thead>
        <tbody>
          {entries.map((entry) => (
            <tr key={entry.id} className="border-b border-rule align-top">
              <td className="py-2 pr-6 whitespace-nowrap text-ink-soft">
                <time dateTime={entry.at}>{entry.at.slice(0, 19).replace('T', ' ')}</time>
              </td>
              <td className="py-2 pr-6">{entry.personName ?? 'the bench'}</td>
              <td className={entry.kind === 'trip' ? 'py-2 pr-6 font-bold text-trip' : 'py-2 pr-6'}>
                {entry.kind === 'trip' && 'Trip: '}
                {entry.sentence}
              </td>
              <td className="py-2 whitespace-nowrap">
                {entry.source === 'bench'
                  ? 'told by the bench'
                  : entry.outcome
                    ? outcomeWords[entry.outcome]
                    : 'not noted'}
              </td>
            </tr>
          ))}
        </tbody>
      </table>
    </div>
  )
}
