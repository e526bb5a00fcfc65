import { href, Link } from 'react-router'
import * as z from 'zod'
import { findBenchLog, type LogEntry } from '../../benches/bench-log.server.ts'
import { requireVisibleBench, toFramed } from '../../benches/visible-benches.server.ts'
import { logSentence } from '../../components/bench/log-words.ts'
import { BenchFrame } from '../../components/bench-frame.tsx'
import { LocalTime } from '../../components/local-time.tsx'
import { databaseContext, personContext } from '../../context.ts'
import type { Route } from './+types/log'

const pageLength = 50
const pageSchema = z.coerce.number().int().min(1).max(100_000).catch(1)

export async function loader({ request, params, context }: Route.LoaderArgs) {
  const db = context.get(databaseContext)
  const person = context.get(personContext)
  const bench = await requireVisibleBench(db, { benchId: params.benchId, person })
  const page = pageSchema.parse(new URL(request.url).searchParams.get('page') ?? 1)
  // One entry more than is shown tells whether there is an older page.
  const entries = await findBenchLog(db, {
    benchId: bench.id,
    reader: person,
    limit: pageLength + 1,
    offset: (page - 1) * pageLength,
  })
  return {
    bench: toFramed(bench),
    person: { id: person.id, role: person.role },
    page,
    entries: entries.slice(0, pageLength),
    hasOlder: entries.length > pageLength,
  }
}

export default function Log({ loaderData }: Route.ComponentProps) {
  const { bench, person, page, entries, hasOlder } = loaderData
  const benchPage = href('/benches/:benchId', { benchId: bench.id })
  return (
    <BenchFrame bench={bench} person={person}>
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
    </BenchFrame>
  )
}

function Empty({ page, benchPage }: { page: number; benchPage: string }) {
  if (page > 1) return <p className="text-ink-soft">Nothing older is noted.</p>
  return (
    <p className="text-ink-soft">
      Nothing has happened here yet. What is asked of this bench and what it does is noted from the first
      command on.{' '}
      <Link to={benchPage} className="link text-ink">
        To the bench
      </Link>
    </p>
  )
}

const outcomeWords = { accepted: 'done', refused: 'refused', unanswered: 'no answer' } as const

/** A table; on a phone each entry is a block of lines, since four columns would not fit. */
function Entries({ entries }: { entries: LogEntry[] }) {
  const cell = 'py-2 pr-6 align-top max-sm:block max-sm:p-0'
  return (
    <table className="w-full border-collapse text-left max-sm:block">
      <thead className="text-[12.5px] text-ink-soft max-sm:sr-only">
        <tr className="border-b border-edge">
          <th className="py-2 pr-6 font-medium">When</th>
          <th className="py-2 pr-6 font-medium">Who</th>
          <th className="py-2 pr-6 font-medium">What</th>
          <th className="py-2 font-medium">Outcome</th>
        </tr>
      </thead>
      <tbody className="max-sm:block">
        {entries.map((entry) => (
          <tr key={entry.id} className="border-b border-rule max-sm:block max-sm:py-2">
            <td className={`${cell} whitespace-nowrap text-ink-soft`}>
              <LocalTime iso={entry.at} parts="date and seconds" />
            </td>
            <td className={`${cell} whitespace-nowrap text-ink-soft`}>{entry.personName ?? 'the bench'}</td>
            <td className={`${cell} w-full`}>
              {entry.kind === 'trip' && <b className="tripped mr-2 px-1.5">Trip</b>}
              {logSentence(entry)}
            </td>
            <td className={`${cell} whitespace-nowrap`}>{outcomeOf(entry)}</td>
          </tr>
        ))}
      </tbody>
    </table>
  )
}

/** Only what was asked has an outcome; what the bench tells is one. */
function outcomeOf({ source, outcome }: LogEntry): string | null {
  if (source === 'bench') return null
  return outcome ? outcomeWords[outcome] : 'not noted'
}
