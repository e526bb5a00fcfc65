import { type SQL, sql } from 'drizzle-orm'
import { may } from '../auth/capabilities.ts'
import type { Database } from '../db/client.server.ts'
import { benchCommands, benchEvents, checklists, classMembers, people, runs } from '../db/schema.ts'
import { commandWords } from './command-words.ts'
import type { Watcher } from './visible-benches.server.ts'

export type LogEntry = {
  id: string
  at: string
  /** `bench`: told by the bridge. `asked`: asked here, with what became of it. */
  source: 'bench' | 'asked'
  kind: string
  sentence: string
  personName: string | null
  outcome: 'accepted' | 'refused' | 'unanswered' | null
}

type Row = {
  id: string
  at: number
  source: 'bench' | 'asked'
  kind: string
  sentence: string | null
  personName: string | null
  asked: string | null
  outcome: LogEntry['outcome']
}

/** Whose doings a person may read: a technician all, an instructor their classes' members', a student their own. */
function isTheirsToRead(personId: SQL, reader: Watcher): SQL {
  if (may(reader.role, 'see-all-events')) return sql`true`
  if (reader.role === 'student') return sql`${personId} = ${reader.id}`
  return sql`(${personId} = ${reader.id} or exists (
    select 1 from ${classMembers} mine join ${classMembers} theirs on theirs.class_id = mine.class_id
    where mine.person_id = ${reader.id} and theirs.person_id = ${personId}))`
}

// What the bench did concerns all who watch it; what a person asked of it is theirs and the staff's.
const events = (benchId: string, reader: Watcher) => sql`
  select ${benchEvents.bridgeId} || ' ' || ${benchEvents.sequence} as id, ${benchEvents.happenedAt} as at, 'bench' as source, ${benchEvents.kind} as kind,
    ${benchEvents.sentence} as sentence, ${benchEvents.personName} as personName, null as asked, null as outcome,
    ${benchEvents.sequence} as tie
  from ${benchEvents}
  where (${benchEvents.benchId} = ${benchId} or ${benchEvents.benchId} is null)
    and (${benchEvents.personId} is null or ${benchEvents.kind} not in ('command', 'refusal')
      or ${isTheirsToRead(sql`${benchEvents.personId}`, reader)})`

const commands = (benchId: string, reader: Watcher) => sql`
  select ${benchCommands.id} as id, ${benchCommands.askedAt} as at, 'asked' as source, ${benchCommands.kind} as kind,
    ${benchCommands.answer} as sentence, ${people.name} as personName, ${benchCommands.asked} as asked,
    ${benchCommands.outcome} as outcome, 0 as tie
  from ${benchCommands} join ${people} on ${people.id} = ${benchCommands.personId}
  where (${benchCommands.benchId} = ${benchId} or ${benchCommands.benchId} is null)
    and ${isTheirsToRead(sql`${benchCommands.personId}`, reader)}`

/** Of a bench without ports, which no bridge tells of. */
const ticks = (benchId: string, reader: Watcher) => sql`
  select ${checklists.id} as id, ${checklists.tickedAt} as at, 'asked' as source, 'checklist' as kind,
    'The checklist of the chain was ticked.' as sentence, ${people.name} as personName, null as asked,
    'accepted' as outcome, 0 as tie
  from ${checklists} join ${runs} on ${runs.id} = ${checklists.runId}
    join ${people} on ${people.id} = ${checklists.personId}
  where ${runs.benchId} = ${benchId} and ${isTheirsToRead(sql`${checklists.personId}`, reader)}`

/**
 * What happened on a bench and what was asked of it, newest first, as far as the reader may know it. A command stands
 * there twice: as it was asked here, and as the bridge told of it.
 */
export async function findBenchLog(
  db: Database,
  {
    benchId,
    reader,
    limit,
    offset = 0,
  }: { benchId: string; reader: Watcher; limit: number; offset?: number },
): Promise<LogEntry[]> {
  const rows = await db.all<Row>(
    sql`${events(benchId, reader)} union all ${commands(benchId, reader)} union all ${ticks(benchId, reader)}
      order by at desc, tie desc, id desc limit ${limit} offset ${offset}`,
  )
  return rows.map(toEntry)
}

/** The newest entries for the bench's own page: what the bridge told, commands that nobody answered, and ticked checklists. */
export async function findNewestEvents(
  db: Database,
  { benchId, reader, limit }: { benchId: string; reader: Watcher; limit: number },
): Promise<LogEntry[]> {
  const rows = await db.all<Row>(
    sql`${events(benchId, reader)} union all ${commands(benchId, reader)} and ${benchCommands.outcome} = 'unanswered'
      union all ${ticks(benchId, reader)} order by at desc, tie desc, id desc limit ${limit}`,
  )
  return rows.map(toEntry)
}

function toEntry({ id, at, source, kind, sentence, personName, asked, outcome }: Row): LogEntry {
  const told = sentence ?? (source === 'asked' ? 'The answer was never noted.' : '')
  return {
    id,
    at: new Date(at).toISOString(),
    source,
    kind,
    sentence: asked === null ? told : `${commandWords(kind, JSON.parse(asked))}: ${told}`,
    personName,
    outcome,
  }
}
