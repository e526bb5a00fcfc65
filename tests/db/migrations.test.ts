import { cpSync, mkdtempSync, readdirSync, readFileSync, rmSync, writeFileSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { createClient } from '@libsql/client'
import { drizzle } from 'drizzle-orm/libsql'
import { migrate } from 'drizzle-orm/libsql/migrator'
import { afterAll, describe, expect, it } from 'vitest'

const directory = mkdtempSync(join(tmpdir(), 'coilside-migrations-'))
afterAll(() => rmSync(directory, { recursive: true, force: true }))

/** The migrations before one, in a folder of their own. */
function migrationsBefore(tag: string): string {
  const folder = join(directory, tag)
  cpSync('drizzle', folder, { recursive: true })
  const journalFile = join(folder, 'meta', '_journal.json')
  const journal = JSON.parse(readFileSync(journalFile, 'utf8')) as { entries: { tag: string }[] }
  const index = journal.entries.findIndex((entry) => entry.tag === tag)
  if (index < 1) throw new Error(`${tag} is not among ${readdirSync('drizzle').join(', ')}`)
  writeFileSync(journalFile, JSON.stringify({ ...journal, entries: journal.entries.slice(0, index) }))
  return folder
}

describe('A database with readings', () => {
  it('keeps them, and what refers to them, when runs may have no bench', async () => {
    const client = createClient({ url: `file:${join(directory, 'site.db')}`, timeout: 2000 })
    const db = drizzle(client)
    await migrate(db, { migrationsFolder: migrationsBefore('0005_imported_runs') })
    await client.batch([
      "insert into people (id, email, name, role, password_hash) values ('p', 'p@lab.test', 'P', 'student', 'none')",
      "insert into benches (id, name, place) values ('b', 'Bench', 'here')",
      "insert into runs (id, bench_id, person_id) values ('r', 'b', 'p')",
      `insert into readings (id, run_id, number, bench_id, revision, person_id, captured_at, window_seconds, polarity,
        anode_volts, u_anode_volts, anode_effective_count, coil_amps, u_coil_amps, coil_effective_count, states)
        values ('d', 'r', 1, 'b', 1, 'p', 1000, 5, 1, 200.25, 0.125, 4, 1.5, 0.0625, 4, '{}')`,
      "insert into edges (id, reading_id, person_id, left_metres, right_metres) values ('e', 'd', 'p', 0.01, 0.09)",
    ])
    const before = (await client.execute('select * from readings')).rows[0]
    await migrate(db, { migrationsFolder: './drizzle' })
    expect((await client.execute('select * from readings')).rows[0]).toMatchObject({ ...before })
    expect(
      (await client.execute('select run_id from edges join readings on readings.id = reading_id')).rows,
    ).toMatchObject([{ run_id: 'r' }])
    expect((await client.execute('pragma foreign_key_check')).rows).toEqual([])
    const orphan =
      "insert into edges (id, reading_id, person_id, left_metres, right_metres) values ('o', 'none', 'p', 0.01, 0.09)"
    await expect(client.execute(orphan)).rejects.toThrow('FOREIGN KEY')
    client.close()
  })
})
