import { type Client, createClient } from '@libsql/client'
import { drizzle, type LibSQLDatabase } from 'drizzle-orm/libsql'
import { migrate } from 'drizzle-orm/libsql/migrator'
import * as schema from './schema.ts'

export type Database = LibSQLDatabase<typeof schema> & { $client: Client }

/**
 * Opens the database, sets what SQLite keeps in the file, and brings the schema up to date.
 * The busy time limit goes to the client itself: it opens further connections on which a PRAGMA would be lost.
 */
export async function openDatabase(url: string): Promise<Database> {
  const client = createClient({ url, timeout: 2000 })
  if (url.startsWith('file:')) await client.execute('PRAGMA journal_mode = WAL')
  const db = drizzle(client, { schema, casing: 'snake_case' })
  await migrate(db, { migrationsFolder: './drizzle' })
  return db
}

/** What `write` hands to its work. Reads as a `Database` does. */
export type Transaction = Parameters<Parameters<Database['transaction']>[0]>[0]

const queues = new WeakMap<Client, Promise<unknown>>()

/**
 * One writer: every change to the database, a single statement too, waits for the transaction before it. A second writer
 * of the same process would otherwise wait inside SQLite, where it blocks the event loop, so that the first cannot end.
 * Do only SQL in `work`, and no further `write`.
 */
export function write<T>(db: Database, work: (tx: Transaction) => Promise<T>): Promise<T> {
  const before = queues.get(db.$client) ?? Promise.resolve()
  const run = before.then(() => db.transaction(work, { behavior: 'immediate' }))
  queues.set(
    db.$client,
    run.catch(() => {}),
  )
  return run
}
