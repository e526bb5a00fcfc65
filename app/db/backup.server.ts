import { chmodSync, existsSync, mkdirSync } from 'node:fs'
import { dirname, join, resolve } from 'node:path'
import { pathToFileURL } from 'node:url'
import { createClient } from '@libsql/client'
import { environment, readEnvironmentFile } from '../env.server.ts'

const busyMilliseconds = 10_000

/**
 * Writes a copy of the database as it stands at one moment, while the site goes on, to a new file named by the time (UTC).
 * It is a whole database of its own: to restore it, stop the site and put it in the place of the file, without that one's
 * `-wal` and `-shm`.
 * @param directory by default `backups` beside the database
 * @returns the path of the copy
 * @throws for a database that is not a file of this machine, or is not there
 */
export async function backUp(
  url: string,
  { directory, now = new Date() }: { directory?: string | undefined; now?: Date } = {},
): Promise<string> {
  const file = /^file:(?!\/\/)([^?]+)/.exec(url)?.[1]
  if (!file) throw new Error(`Only a database in a file can be copied here, not ${url.split(':')[0]}:`)
  if (!existsSync(file)) throw new Error(`There is no database at ${file}`)
  const folder = directory ?? join(dirname(file), 'backups')
  mkdirSync(folder, { recursive: true })
  const time = now
    .toISOString()
    .replace(/\.\d+Z$/, 'Z')
    .replaceAll(':', '-')
  const copy = resolve(folder, `coilside-${time}.db`)
  const client = createClient({ url, timeout: busyMilliseconds })
  try {
    // Refuses a file that is there already.
    await client.execute({ sql: 'VACUUM INTO ?', args: [copy] })
  } finally {
    client.close()
  }
  // It holds everyone's names and the hashes of their passwords.
  chmodSync(copy, 0o600)
  return copy
}

if (process.argv[1] && import.meta.url === pathToFileURL(process.argv[1]).href) {
  readEnvironmentFile()
  console.log(`Backed up to ${await backUp(environment().DATABASE_URL, { directory: process.argv[2] })}`)
}
