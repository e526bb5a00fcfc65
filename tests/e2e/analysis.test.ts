import { readdirSync, readFileSync } from 'node:fs'
import { join } from 'node:path'
import { eq } from 'drizzle-orm'
import { openDatabase } from '#app/db/client.server.ts'
import { people } from '#app/db/schema.ts'
import { startRun } from '#app/runs/runs.server.ts'
import { spreadSettings, storeRun } from '#tests/support/stored-run.ts'
import { expectEveryLook } from './every-look.ts'
import { expect, expectAccessible, test } from './fixtures.ts'

/** The database of the site, the student, and what leaves bench 1 with a run that has no reading yet. */
async function open(url: string) {
  const db = await openDatabase(url)
  const student = await db.query.people.findFirst({ where: eq(people.email, 'student@lab.test') })
  const personId = student?.id ?? ''
  return {
    db,
    personId,
    async leave() {
      await startRun(db, { benchId: 'bench-1', personId })
      db.$client.close()
    },
  }
}

test('A student reads the analysis of a run: value, cause, lines, budget, Monte Carlo, and what to measure next', async ({
  site,
  signInAs,
}) => {
  test.setTimeout(240_000)
  const { db, personId, leave } = await open(site.databaseUrl)
  const runId = await storeRun(db, {
    personId,
    settings: [...spreadSettings, ...spreadSettings],
    truth: { strayFieldTesla: 55e-6 },
    edgeMetres: 0.15e-3,
  })
  const page = await signInAs('student', { path: '/benches/bench-1' })
  await page.getByRole('link', { name: 'Analysis of this run' }).click()
  await page.waitForURL(`**/runs/${runId}/analysis`)

  await test.step('reads the value with its uncertainty, and what shifts it', async () => {
    await expect(page.getByText(/^\d\.\d+\(\d+\) × 10¹¹ C\/kg$/)).toBeVisible()
    await expect(
      page.getByText(/stray field along the coil axis \d+(\.\d)? ± \d+(\.\d)? µT/).first(),
    ).toBeVisible()
    await expect(page.getByText(/No such readings|constant percentage error/).first()).toBeVisible()
    await expect(page.getByText(/accepted value/)).toHaveCount(0)
    await expectAccessible(page)
  })

  await test.step('looks at another line, its points by keyboard and its numbers', async () => {
    await page.getByRole('link', { name: '√(2V)/r against kIg' }).first().click()
    await page.waitForURL(/line=root/)
    await expect(page.getByRole('img', { name: /√\(2V\)\/r against kIg of 24 readings/ })).toBeVisible()
    await page.getByRole('slider', { name: 'reading' }).press('ArrowRight')
    await expect(page.getByText(/^\d+: residual [+−]\d\.\d/)).toBeVisible()
    await page.getByText('as a table').first().click()
    await expect(page.getByRole('columnheader', { name: 'kIg, mT' })).toBeVisible()
  })

  await test.step('draws by Monte Carlo, with progress, and can stop it', async () => {
    await page.getByRole('button', { name: 'Draw' }).click()
    await expect(page.getByText(/[\d,]+ drawn/)).toBeVisible()
    await page.getByRole('button', { name: 'Stop' }).click()
    await expect(page.getByText(/first-order budget/).last()).toBeVisible()
    await expect(page.getByRole('img', { name: /How often each value/ })).toBeVisible()
  })

  await test.step('states it by another fit, and back', async () => {
    await page
      .getByLabel('stated by')
      .selectOption({ label: 'V against (kIgr)²/2 through the origin, ordinary least squares' })
    await page.getByRole('button', { name: 'State it by this fit' }).click()
    await expect(page.getByText(/95 %, by V against \(kIgr\)²\/2 through the origin/).first()).toBeVisible()
    await page.getByLabel('stated by').selectOption({ label: 'the general model' })
    await page.getByRole('button', { name: 'State it by this fit' }).click()
    await expect(page.getByText(/95 %, by the general model/)).toBeVisible()
  })

  await test.step('stands in both lights, on a phone and on a projector', async () => {
    await expectEveryLook(page, 'analysis')
  })
  await leave()
})

test('An instructor sees how a run stands to the accepted value, and takes further settings into its plan', async ({
  site,
  signInAs,
}) => {
  const { db, personId, leave } = await open(site.databaseUrl)
  const runId = await storeRun(db, { personId, settings: spreadSettings.slice(3, 8) })
  const page = await signInAs('instructor', { path: `/runs/${runId}/analysis` })
  await expect(page.getByText(/% (above|below) the accepted value, ζ = /)).toBeVisible()
  await page.getByRole('button', { name: 'Add to the plan of this run' }).click()
  await expect(page.getByText(/added to the plan|Added to the plan/)).toBeVisible()
  await expect(page.getByRole('heading', { name: 'Planned' })).toBeVisible()
  await page.getByRole('button', { name: 'take off' }).first().click()
  await expect(page.getByText('Taken off the plan.').first()).toBeVisible()
  await leave()
})

test('A student plans settings with the value of the run, and takes them into its plan', async ({
  site,
  signInAs,
}) => {
  const { db, personId, leave } = await open(site.databaseUrl)
  await storeRun(db, { personId, settings: spreadSettings.slice(0, 4) })
  const page = await signInAs('student', { path: '/benches/bench-1' })
  await page.getByRole('link', { name: 'Planner' }).click()
  await expect(page.getByRole('heading', { name: 'Planner for Bench 1' })).toBeVisible()
  await expect(page.getByText(/with the value of e\/m that this run states/)).toBeVisible()
  await page.getByLabel('readings').fill('5')
  await page.getByRole('button', { name: 'Choose' }).click()
  await page.waitForURL(/count=5/)
  await page.getByRole('button', { name: 'Take into the plan of the open run' }).click()
  await expect(page.getByText(/added to the plan/i)).toBeVisible()
  await expectEveryLook(page, 'planner')
  await leave()
})

test('What the browser loads does not hold the accepted value', async () => {
  const folder = 'build/client/assets'
  const scripts = readdirSync(folder).filter((name) => name.endsWith('.js'))
  expect(scripts.length).toBeGreaterThan(5)
  for (const name of scripts)
    expect(readFileSync(join(folder, name), 'utf8'), name).not.toMatch(/1\.7588|175882000|1\.75882/)
})
