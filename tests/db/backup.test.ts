import { execFile } from 'node:child_process'
import { mkdtempSync, readdirSync, statSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { promisify } from 'node:util'
import { createClient } from '@libsql/client'
import { sql } from 'drizzle-orm'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { backUp } from '#app/db/backup.server.ts'
import { type Database, openDatabase, write } from '#app/db/client.server.ts'
import { channelSummaries, spoolMarks } from '#app/db/schema.ts'
import { seedDemo } from '#app/db/seed.server.ts'

let directory: string
let url: string
let db: Database

beforeEach(async () => {
  directory = mkdtempSync(join(tmpdir(), 'coilside-backup-'))
  url = `file:${join(directory, 'site.db')}`
  db = await openDatabase(url)
})
afterEach(() => db.$client.close())

/** Summaries and their mark, which stand together or not at all. */
const addSummaries = (first: number, count: number) =>
  write(db, async (tx) => {
    const rows = Array.from({ length: count }, (_, index) => ({
      bridgeId: 'room-1',
      sequence: first + index,
      benchId: 'bench-1',
      second: first + index,
      channel: 'anodeVolts',
      min: 1,
      mean: 2,
      max: 3,
      count: 10,
    }))
    await tx.insert(channelSummaries).values(rows)
    const marks = { confirmedEvent: 0, confirmedSummary: first + count - 1 }
    await tx
      .insert(spoolMarks)
      .values({ bridgeId: 'room-1', ...marks })
      .onConflictDoUpdate({ target: spoolMarks.bridgeId, set: marks })
  })

async function read(file: string) {
  const client = createClient({ url: `file:${file}` })
  const one = async (query: string) => Object.values((await client.execute(query)).rows[0] ?? {})[0]
  const found = {
    integrity: await one('PRAGMA integrity_check'),
    people: await one('SELECT count(*) FROM people'),
    summaries: await one('SELECT count(*) FROM channel_summaries'),
    mark: await one('SELECT confirmed_summary FROM spool_marks'),
  }
  client.close()
  return found
}

describe('A backup', () => {
  it('is a whole database of one moment, taken while the site is being written to', async () => {
    await seedDemo(db)
    await addSummaries(1, 400)
    const writing = (async () => {
      for (let batch = 1; batch <= 20; batch++) await addSummaries(1 + 400 * batch, 400)
    })()
    const copies: string[] = []
    for (let second = 0; second < 5; second++)
      copies.push(await backUp(url, { now: new Date(Date.UTC(2026, 10, 3, 14, 0, second)) }))
    await writing
    for (const copy of copies) {
      const { integrity, people, summaries, mark } = await read(copy)
      expect(integrity).toBe('ok')
      expect(people).toBe(4)
      expect(summaries).toBe(mark)
    }
    expect(await db.$count(channelSummaries)).toBe(21 * 400)
    expect(readdirSync(join(directory, 'backups')).sort()[0]).toBe('coilside-2026-11-03T14-00-00Z.db')
  })

  it('opens as a site’s database, with its schema up to date', async () => {
    await seedDemo(db)
    const copy = await openDatabase(`file:${await backUp(url)}`)
    expect(await seedDemo(copy)).toBe('left as it was')
    expect((await copy.all(sql`pragma foreign_key_check`)).length).toBe(0)
    copy.$client.close()
  })

  it('never overwrites another, and makes no database where there is none', async () => {
    const now = new Date('2026-11-03T14:00:00Z')
    await backUp(url, { now })
    await expect(backUp(url, { now })).rejects.toThrow()
    await expect(backUp(`file:${join(directory, 'none.db')}`)).rejects.toThrow('There is no database')
    await expect(backUp('libsql://db.lab.test')).rejects.toThrow('Only a database in a file')
    expect(readdirSync(directory)).not.toContain('none.db')
  })

  it('is made by its command, in the folder that is asked for', async () => {
    const folder = join(directory, 'elsewhere')
    const { stdout } = await promisify(execFile)('npm', ['run', '--silent', 'db:backup', '--', folder], {
      env: { ...process.env, DATABASE_URL: url },
    })
    const [name = ''] = readdirSync(folder)
    expect(name).toMatch(/^coilside-\d{4}-\d\d-\d\dT\d\d-\d\d-\d\dZ\.db$/)
    expect(stdout).toContain(join(folder, name))
    expect(statSync(join(folder, name)).mode & 0o077, 'others may not read it').toBe(0)
  })
})
