import { href, Link } from 'react-router'
import type { BenchView } from '#app/benches/bench-view.server.ts'
import { useEvents } from '#app/telemetry/telemetry.tsx'
import { LocalTime } from '../local-time.tsx'
import { isRepetition, logSentence, namedBeside } from './log-words.ts'

const shown = 8

type Line = { key: string; at: string; kind: string; sentence: string; personName: string | null }

type Stored = { view: Pick<BenchView, 'log'> & { bench: { id: string } } }

/** What happened here last: the stored log, with what this page has heard since. */
export function EventLog({ view }: Stored) {
  const events = useEvents(view.bench.id)
  const heard = events.map<Line>((event) => ({
    key: String(event.sequence),
    at: new Date(event.at * 1000).toISOString(),
    kind: event.kind,
    sentence: event.sentence,
    personName: event.personName,
  }))
  return <NewestLines view={view} heard={heard} />
}

/** What happened here last as it is stored: of a bench that no bridge tells of. */
export function StoredLog({ view }: Stored) {
  return <NewestLines view={view} heard={[]} />
}

function NewestLines({ view, heard }: Stored & { heard: Line[] }) {
  const lines = mergeLog(
    view.log.map<Line>((entry) => ({ ...entry, key: `${entry.at} ${entry.kind} ${entry.sentence}` })),
    heard,
  )
    .filter((line) => !isRepetition(line))
    .slice(0, shown)
  return (
    <section aria-labelledby="log" className="min-w-0">
      <h2 id="log" className="mb-1 flex flex-wrap justify-between gap-3">
        <span className="font-medium">Log</span>
        <Link
          to={href('/benches/:benchId/log', { benchId: view.bench.id })}
          className="link-alone text-ink-soft"
        >
          all of it
        </Link>
      </h2>
      {lines.length === 0 && <p className="text-ink-soft">Nothing has happened on this bench yet.</p>}
      <ol className="text-[12.5px]">
        {lines.map((line) => (
          <li key={line.key} className="flex gap-3 border-b border-rule py-1">
            <LocalTime iso={line.at} parts="time" className="text-ink-soft" />
            <LineWords line={line} />
          </li>
        ))}
      </ol>
    </section>
  )
}

function LineWords({ line }: { line: Line }) {
  const sentence = logSentence(line)
  const name = namedBeside(sentence, line.personName)
  return (
    <span className="min-w-0">
      {line.kind === 'trip' && <b className="tripped mr-1.5 px-1">Trip</b>}
      {sentence}
      {name && <span className="text-ink-soft"> {name}</span>}
    </span>
  )
}

/** Both lists as one, the newest first, with nothing twice: the same sentence in the same second is the same event. */
export function mergeLog(stored: Line[], heard: Line[]): Line[] {
  const seen = new Set<string>()
  return [...heard, ...stored]
    .filter(({ at, sentence }) => {
      const identity = `${at.slice(0, 19)} ${sentence}`
      return !seen.has(identity) && seen.add(identity)
    })
    .sort((a, b) => b.at.localeCompare(a.at))
}
