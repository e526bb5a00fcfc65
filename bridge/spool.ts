import { type Client, createClient } from '@libsql/client'
import * as z from 'zod'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import {
  configurationSchema,
  type SpoolBatch,
  type SpoolReply,
  type Summary,
  spoolBatchSchema,
} from '#app/protocol/commands.ts'
import type { BenchEvent } from '#app/protocol/messages.ts'
import type { UnnumberedSummary } from './recorder.ts'

const lockSeconds = 2
/** About a day of three benches, and half a gigabyte. Events are few, and are never dropped. */
const mostSummariesKept = 2_000_000
const schema = [
  'PRAGMA journal_mode = WAL',
  // With a log ahead, what was written outlives a killed process; only a power cut may take the last of it.
  'PRAGMA synchronous = NORMAL',
  'CREATE TABLE IF NOT EXISTS events (sequence INTEGER PRIMARY KEY AUTOINCREMENT, body TEXT NOT NULL)',
  'CREATE TABLE IF NOT EXISTS summaries (sequence INTEGER PRIMARY KEY AUTOINCREMENT, body TEXT NOT NULL)',
  'CREATE TABLE IF NOT EXISTS kept (name TEXT PRIMARY KEY, body TEXT NOT NULL)',
  'CREATE TABLE IF NOT EXISTS revocations (personId TEXT PRIMARY KEY, at REAL NOT NULL)',
]

/** The bridge's own file: what the app has not yet confirmed, the last configuration, the revocations. */
export type Spool = {
  /** Keeps events in order; resolves with each under its number. AUTOINCREMENT never gives a number twice. */
  addEvents(events: readonly Omit<BenchEvent, 'sequence'>[]): Promise<BenchEvent[]>
  addSummaries(summaries: readonly UnnumberedSummary[]): Promise<void>
  /** The oldest that are not confirmed. */
  batch(limits: { events: number; summaries: number }): Promise<Omit<SpoolBatch, 'bridgeId'>>
  /** Drops what the app confirms, and numbers the rest anew where it says so. */
  settle(reply: SpoolReply): Promise<void>
  configuration(): Promise<BenchConfig[] | null>
  keepConfiguration(benches: readonly BenchConfig[]): Promise<void>
  revocations(): Promise<Map<string, number>>
  revoke(personId: string, at: number): Promise<void>
  close(): Promise<void>
}

/**
 * Opens or creates the spool. `url` is a libSQL URL, a file of this bridge alone. While the app stays away for long, the
 * oldest summaries make room for the newest.
 */
export async function openSpool(
  url: string,
  { mostSummaries = mostSummariesKept }: { mostSummaries?: number } = {},
): Promise<Spool> {
  const client: Client = createClient({ url, timeout: lockSeconds * 1000 })
  for (const statement of schema) await client.execute(statement)
  let last: Promise<unknown> = Promise.resolve()
  // One writer at a time: a second one would block the whole process while it waits for the lock.
  const inTurn = <T>(work: () => Promise<T>): Promise<T> => {
    const run = last.then(work, work)
    last = run.catch(() => undefined)
    return run
  }
  const add = async (table: 'events' | 'summaries', bodies: readonly unknown[]): Promise<number[]> => {
    if (bodies.length === 0) return []
    const results = await client.batch(
      bodies.map((body) => ({
        sql: `INSERT INTO ${table} (body) VALUES (?) RETURNING sequence`,
        args: [JSON.stringify(body)],
      })),
      'write',
    )
    return results.map(({ rows }) => Number(rows[0]?.sequence))
  }
  const rows = async (table: 'events' | 'summaries', limit: number) => {
    const result = await client.execute({
      sql: `SELECT sequence, body FROM ${table} ORDER BY sequence LIMIT ?`,
      args: [limit],
    })
    return result.rows.map(({ sequence, body }) => ({
      ...(JSON.parse(String(body)) as object),
      sequence: Number(sequence),
    }))
  }
  const highestGiven = async (table: 'events' | 'summaries'): Promise<number> => {
    const given = await client.execute({
      sql: 'SELECT seq FROM sqlite_sequence WHERE name = ?',
      args: [table],
    })
    return Number(given.rows[0]?.seq ?? 0)
  }
  const oldest = async (table: 'events' | 'summaries'): Promise<number> => {
    const result = await client.execute(`SELECT min(sequence) AS oldest FROM ${table}`)
    return Number(result.rows[0]?.oldest ?? (await highestGiven(table)) + 1)
  }
  const dropUpTo = (table: 'events' | 'summaries', upTo: number) =>
    client.execute({ sql: `DELETE FROM ${table} WHERE sequence <= ?`, args: [upTo] })
  /** Numbers what is left anew, in its order, behind a number. */
  const renumber = async (table: 'events' | 'summaries', after: number) => {
    const shift = after + 1 - (await oldest(table))
    const highest = await highestGiven(table)
    if (shift <= 0) return
    await client.batch(
      [
        // In two steps, since numbers must not meet on the way.
        { sql: `UPDATE ${table} SET sequence = -sequence`, args: [] },
        { sql: `UPDATE ${table} SET sequence = ? - sequence`, args: [shift] },
        highest === 0
          ? { sql: 'INSERT INTO sqlite_sequence (seq, name) VALUES (?, ?)', args: [shift, table] }
          : { sql: 'UPDATE sqlite_sequence SET seq = seq + ? WHERE name = ?', args: [shift, table] },
      ],
      'write',
    )
  }
  return {
    addEvents: (events) =>
      inTurn(async () => {
        const numbers = await add('events', events)
        return events.map((event, index) => ({ ...event, sequence: numbers[index] ?? 0 }))
      }),
    addSummaries: (summaries) =>
      inTurn(async () => {
        const numbers = await add('summaries', summaries)
        await dropUpTo('summaries', (numbers.at(-1) ?? 0) - mostSummaries)
      }),
    batch: (limits) =>
      inTurn(async () => ({
        oldest: { event: await oldest('events'), summary: await oldest('summaries') },
        events: z.array(spoolBatchSchema.shape.events.element).parse(await rows('events', limits.events)),
        summaries: (await rows('summaries', limits.summaries)) as Summary[],
      })),
    settle: ({ confirmedEvent, confirmedSummary, continueAfter }) =>
      inTurn(async () => {
        await dropUpTo('events', confirmedEvent)
        await dropUpTo('summaries', confirmedSummary)
        if (continueAfter?.event !== undefined) await renumber('events', continueAfter.event)
        if (continueAfter?.summary !== undefined) await renumber('summaries', continueAfter.summary)
      }),
    configuration: () =>
      inTurn(async () => {
        const result = await client.execute("SELECT body FROM kept WHERE name = 'configuration'")
        const body = result.rows[0]?.body
        if (body === undefined) return null
        // Of an older version of the bridge the file may hold what this one does not understand.
        const parsed = configurationSchema.safeParse(JSON.parse(String(body)))
        return parsed.success ? parsed.data.benches : null
      }),
    keepConfiguration: (benches) =>
      inTurn(async () => {
        await client.execute({
          sql: "INSERT INTO kept (name, body) VALUES ('configuration', ?) ON CONFLICT (name) DO UPDATE SET body = excluded.body",
          args: [JSON.stringify({ benches })],
        })
      }),
    revocations: () =>
      inTurn(async () => {
        const result = await client.execute('SELECT personId, at FROM revocations')
        return new Map(result.rows.map(({ personId, at }) => [String(personId), Number(at)]))
      }),
    revoke: (personId, at) =>
      inTurn(async () => {
        await client.execute({
          sql: 'INSERT INTO revocations (personId, at) VALUES (?, ?) ON CONFLICT (personId) DO UPDATE SET at = max(at, excluded.at)',
          args: [personId, at],
        })
      }),
    async close() {
      await last
      client.close()
    },
  }
}
