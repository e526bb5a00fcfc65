import { readEnvironmentFile } from '../env.server.ts'
import { siteDatabase } from './site.server.ts'

readEnvironmentFile()
await siteDatabase()
console.log('The database is up to date.')
