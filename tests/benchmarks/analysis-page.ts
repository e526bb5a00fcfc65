import { mkdtempSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { startSession } from '#app/auth/sessions.server.ts'
import { startApp } from '#tests/support/app-handler.ts'
import { openClassSite } from '#tests/support/class-site.ts'
import { spreadSettings, storeRun } from '#tests/support/stored-run.ts'
import type { Figure } from './measure.ts'

const READINGS = 60
const RUNS = 9

/**
 * Server time of the first page of each of several runs, from the request to the last byte of its HTML. The application runs
 * from its sources here, as it is developed with, which is slower than the site.
 */
export async function analysisPageFigures(): Promise<Figure[]> {
  process.env.DATABASE_URL ??= `file:${join(mkdtempSync(join(tmpdir(), 'coilside-bench-')), 'bench.db')}`
  const { db, student } = await openClassSite()
  const app = await startApp()
  const settings = Array.from(
    { length: READINGS },
    (_, i) => spreadSettings[i % spreadSettings.length],
  ).filter((setting) => setting !== undefined)
  const headers = { Cookie: (await startSession(student.id)).split(';')[0] ?? '' }
  const seconds: number[] = []
  for (let run = 0; run <= RUNS; run++) {
    const runId = await storeRun(db, {
      personId: student.id,
      settings,
      seed: run + 1,
      truth: { strayFieldTesla: 3e-5 },
    })
    const began = performance.now()
    const response = await app.handle(
      new Request(`http://127.0.0.1:3000/runs/${runId}/analysis`, { headers }),
    )
    const html = await response.text()
    if (response.status !== 200 || !html.includes(`>${READINGS}<`)) throw new Error('The page is not whole')
    // The first one loads the application's modules and tabulates the bench's field.
    if (run > 0) seconds.push((performance.now() - began) / 1000)
  }
  await app.close()
  seconds.sort((a, b) => a - b)
  return [
    {
      name: `analysis page of ${READINGS} readings, first render`,
      seconds: seconds[seconds.length >> 1] as number,
      goalSeconds: 0.1,
    },
  ]
}
