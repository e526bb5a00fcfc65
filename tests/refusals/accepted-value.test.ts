import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { startSession } from '#app/auth/sessions.server.ts'
import routes from '#app/routes.ts'
import { type AppHandler, startApp } from '#tests/support/app-handler.ts'
import { type ClassSite, openClassSite } from '#tests/support/class-site.ts'
import { ownDatabaseUrl } from '#tests/support/database.ts'
import { spreadSettings, storeRun } from '#tests/support/stored-run.ts'

let app: AppHandler
let site: ClassSite
let runId: string
let readingId: string

beforeAll(async () => {
  vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
  site = await openClassSite()
  app = await startApp()
  runId = await storeRun(site.db, { personId: site.student.id, settings: spreadSettings })
  readingId = (await site.db.query.readings.findFirst())?.id ?? ''
}, 60_000)
afterAll(() => app.close())

type Entry = { path?: string; index?: boolean; children?: Entry[] }
const flatten = (entries: Entry[], above = ''): string[] =>
  entries.flatMap(({ path, index, children }) => {
    const here = path === undefined ? above : `${above}/${path}`
    if (children) return flatten(children, here)
    return path !== undefined || index ? [here || '/'] : []
  })

/** The accepted value in any of its digits that a page could hold, its name, and a deviation from it. */
const givenAway = /1\.7588|175882000|1\.75882|accepted value|CODATA|% (below|above)/

async function textOf(personId: string, path: string): Promise<string> {
  const headers = { Cookie: (await startSession(personId)).split(';')[0] ?? '' }
  const response = await app.handle(new Request(`http://127.0.0.1:3000${path}`, { headers }))
  return response.text()
}

describe('Before its reveal', () => {
  it('no page and no data of a student hold the accepted value or a deviation from it', async () => {
    const paths = flatten((await routes) as Entry[])
      .map((path) =>
        path.replace(':benchId', 'bench-1').replace(':runId', runId).replace(':readingId', readingId),
      )
      .filter((path) => !/[*:]/.test(path))
    expect(paths.length).toBeGreaterThan(15)
    for (const path of paths)
      for (const asked of [path, `${path === '/' ? '/_root' : path}.data`])
        expect(await textOf(site.student.id, asked), asked).not.toMatch(givenAway)
  })

  it('the same walk finds it on a page of staff, so that it would be found', async () => {
    expect(await textOf(site.instructor.id, `/runs/${runId}/analysis`)).toMatch(givenAway)
  })
})
