import { type Client, createClient } from '@libsql/client'
import * as z from 'zod'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import {
  configurationSchema,
  type SpoolBatch,
  type Summary,
  spoolBatchSchema,
} from '#app/protocol/commands.ts'
import type { BenchEvent } from '#app/protocol/messages.ts'
import type { UnnumberedSummary } from './recorder.ts'

const lockSeconds = 2
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
  batch(limits: { events: number; summaries: number }): Promise<Pick<SpoolBatch, 'events' | 'summaries'>>
  /** `upTo` as the app says it, for each sequence. */
  confirm(upTo: { event: number; summary: number }): Promise<void>
  configuration(): Promise<BenchConfig[] | null>
  keepConfiguration(benches: readonly BenchConfig[]): Promise<void>
  revocations(): Promise<Map<string, number>>
  revoke(personId: string, at: number): Promise<void>
  close(): Promise<void>
}

/** Opens or creates the spool. `url` is a libSQL URL, a file of this bridge alone. */
export async function openSpool(url: string): Promise<Spool> {
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
  /** What is confirmed goes. A number that was never given here is of a former spool: numbering goes on behind it. */
  const confirmIn = async (table: 'events' | 'summaries', upTo: number) => {
    const given = await client.execute({
      sql: 'SELECT seq FROM sqlite_sequence WHERE name = ?',
      args: [table],
    })
    const highest = Number(given.rows[0]?.seq ?? 0)
    if (upTo <= highest) {
      await client.execute({ sql: `DELETE FROM ${table} WHERE sequence <= ?`, args: [upTo] })
      return
    }
    const args = [upTo, table]
    await client.batch(
      [
        // In two steps, since numbers must not meet on the way.
        { sql: `UPDATE ${table} SET sequence = -sequence`, args: [] },
        { sql: `UPDATE ${table} SET sequence = ? - sequence`, args: [upTo] },
        highest === 0
          ? { sql: 'INSERT INTO sqlite_sequence (seq, name) VALUES (?, ?)', args }
          : { sql: 'UPDATE sqlite_sequence SET seq = seq + ? WHERE name = ?', args },
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
        await add('summaries', summaries)
      }),
    batch: (limits) =>
      inTurn(async () => ({
        events: z.array(spoolBatchSchema.shape.events.element).parse(await rows('events', limits.events)),
        summaries: (await rows('summaries', limits.summaries)) as Summary[],
      })),
    confirm: ({ event, summary }) =>
      inTurn(async () => {
        await confirmIn('events', event)
        await confirmIn('summaries', summary)
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
