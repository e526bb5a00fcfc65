import { may } from '../auth/capabilities.ts'
import type { Database } from '../db/client.server.ts'
import type { BenchConfig, TypedBench } from '../protocol/bench-config.ts'
import { findTicked, type Ticked } from '../runs/checklist.server.ts'
import { listReadings, type ReadingView } from '../runs/reading-view.server.ts'
import { findOpenRun } from '../runs/runs.server.ts'
import type { Role } from '../safety/types.ts'
import { findAcknowledged } from './acknowledgements.server.ts'
import { findNewestEvents } from './bench-log.server.ts'
import { listWatchers, requireVisibleBench, type Watcher } from './visible-benches.server.ts'

export type { ReadingView }

type Shared = {
  person: { id: string; name: string; role: Role }
  may: { takeControls: boolean; takeOver: boolean; makeSafe: boolean; reset: boolean }
  cautionsAcknowledged: boolean
  /** Those to whom the controls can be handed: everyone else who may watch this bench. */
  people: { id: string; name: string; role: Role; acknowledged: boolean }[]
  run: { id: string; startedAt: string; by: string } | null
  readings: ReadingView[]
  log: { at: string; kind: string; sentence: string; personName: string | null }[]
}
type Named<Config> = { id: string; name: string; place: string; config: Config }

export type BenchView = Shared & { bench: Named<BenchConfig> }

/** Of a bench without ports, with who has ticked its checklist for this run. */
export type TypedBenchView = Shared & { bench: Named<TypedBench>; ticked: Ticked[] }

const logLength = 20

/** All that the bench's page shows but the live values. Throws a 404 when this person may not watch this bench. */
export async function loadBenchView(
  db: Database,
  { benchId, person }: { benchId: string; person: Watcher & { name: string } },
): Promise<BenchView | TypedBenchView> {
  const { config, ...named } = await requireVisibleBench(db, { benchId, person })
  const [watchers, run, log] = await Promise.all([
    listWatchers(db, benchId),
    findOpenRun(db, benchId),
    findNewestEvents(db, { benchId, reader: person, limit: logLength }),
  ])
  const personIds = [person.id, ...watchers.map(({ id }) => id)]
  const [acknowledged, readings] = await Promise.all([
    findAcknowledged(db, { personIds }),
    run ? listReadings(db, { runId: run.id }) : [],
  ])
  const shared: Shared = {
    person: { id: person.id, name: person.name, role: person.role },
    may: {
      takeControls: may(person.role, 'take-controls'),
      takeOver: may(person.role, 'take-over'),
      makeSafe: may(person.role, 'make-bench-safe'),
      reset: may(person.role, 'reset-trip'),
    },
    cautionsAcknowledged: acknowledged.has(person.id),
    people: watchers
      .filter(({ id }) => id !== person.id)
      .map((watcher) => ({ ...watcher, acknowledged: acknowledged.has(watcher.id) })),
    run: run && { id: run.id, startedAt: run.startedAt.toISOString(), by: run.by },
    readings,
    log: log.map(({ at, kind, sentence, personName }) => ({ at, kind, sentence, personName })),
  }
  if (config.instruments !== null) return { ...shared, bench: { ...named, config } }
  const ticked = run ? await findTicked(db, { runId: run.id, revision: config.revision }) : []
  return { ...shared, bench: { ...named, config }, ticked }
}
