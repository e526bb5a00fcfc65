import { mkdirSync } from 'node:fs'
import { dirname } from 'node:path'
import { environment } from '../env.server.ts'
import { type Database, openDatabase } from './client.server.ts'

// Kept on the global object so that a reload of modules in development does not open the file again.
const kept = globalThis as { coilsideDatabase?: Promise<Database> }

/** The site's database, opened and migrated on the first call. */
export function siteDatabase(): Promise<Database> {
  kept.coilsideDatabase ??= openSite(environment().DATABASE_URL)
  return kept.coilsideDatabase
}

async function openSite(url: string) {
  if (url.startsWith('file:')) mkdirSync(dirname(url.slice('file:'.length)), { recursive: true })
  return openDatabase(url)
}
