import { siteDatabase } from './site.server.ts'

await siteDatabase()
console.log('The database is up to date.')
