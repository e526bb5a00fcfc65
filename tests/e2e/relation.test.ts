import { mkdirSync } from 'node:fs'
import { eq } from 'drizzle-orm'
import { openDatabase } from '#app/db/client.server.ts'
import { people } from '#app/db/schema.ts'
import { startRun } from '#app/runs/runs.server.ts'
import { spreadSettings, storeRun } from '#tests/support/stored-run.ts'
import { expect, expectAccessible, test } from './fixtures.ts'

const pictures = 'test-results/pictures'

test('A student derives their relation: the slip is named, they find it, and it works out their readings', async ({
  site,
  signInAs,
}) => {
  mkdirSync(pictures, { recursive: true })
  const db = await openDatabase(site.databaseUrl)
  const student = await db.query.people.findFirst({ where: eq(people.email, 'student@lab.test') })
  const personId = student?.id ?? ''
  await storeRun(db, { personId, settings: spreadSettings.slice(0, 5) })
  const page = await signInAs('student', { path: '/benches/bench-1' })
  await page.getByRole('link', { name: 'Relation', exact: true }).click()
  await expect(page.getByRole('heading', { name: 'Your own relation for e/m' })).toBeVisible()
  await expect(page.getByText('A relation that holds is kept here')).toBeVisible()

  const formula = page.getByLabel('e/m =')
  const check = page.getByRole('button', { name: 'Check' })

  await test.step('names the symbols, one of them wrongly', async () => {
    const symbols = [
      ['anode voltage', 'U'],
      ['current through each coil', 'I'],
      ['diameter of the beam’s circle', 'd'],
      ['number of turns of each coil', 'N'],
      ['radius of the coils', '2R'],
      ['magnetic constant', 'μ₀'],
    ] as const
    for (const [quantity, symbol] of symbols) await page.getByLabel(`Symbol of the ${quantity}`).fill(symbol)
    await formula.fill('2 U (5/4)³ R² / (μ₀ N I d')
    await check.click()
    await expect(page.getByText('A symbol begins with a Latin or Greek letter')).toBeVisible()
    await page.getByLabel('Symbol of the radius of the coils').fill('R')
  })

  await test.step('is told where it cannot be read, and what kind of slip is in it', async () => {
    await formula.press('Enter')
    await expect(page.getByText('It could not be read.')).toBeVisible()
    await formula.fill('2 U (5/4)³ R² / (μ₀ N I d)')
    await formula.press('Enter')
    await expect(page.getByText(/Its unit comes out as m²\/s/)).toBeVisible()
    await formula.fill('2 U (5/4)³ R² / (μ₀ N I d)²')
    await check.click()
    await expect(page.getByText('It would hold if d were the radius of the beam’s circle')).toBeVisible()
    await expect(page.getByText('e/m = 2·U·(5 / 4)³·R² / (μ0·N·I·d)²')).toBeVisible()
    await expectAccessible(page)
  })

  await test.step('finds it, and sees it kept with a value for each reading', async () => {
    await formula.fill('8 U (5/4)³ R² / (μ₀ N I d)²')
    await check.click()
    await expect(page.getByText('It holds:')).toBeVisible()
    const rows = page.getByRole('region', { name: /Values by your own relation/ }).getByRole('row')
    await expect(rows).toHaveCount(6)
    await expect(rows.nth(1).getByRole('cell').first()).toHaveText(/^1\.[5-9]\d\d$/)
    await page.reload()
    await expect(formula).toHaveValue('8 U (5/4)³ R² / (μ₀ N I d)²')
    await expect(rows).toHaveCount(6)
    await expect(page.getByText(/accepted value/)).toHaveCount(0)
  })

  await test.step('in both lights, on a phone and on a projector', async () => {
    await formula.fill('8 U (R² + s²/4)³ / (μ₀ N I d)²')
    await check.click()
    await expect(page.getByText('s is not one of your symbols')).toBeVisible()
    for (const light of ['dark', 'lit'] as const)
      for (const size of [
        { name: '360', width: 360, height: 800 },
        { name: '1080p', width: 1920, height: 1080 },
      ]) {
        await page.setViewportSize(size)
        await page.getByRole('button', { name: light, exact: true }).click()
        await expect(page.locator('html')).toHaveAttribute('data-light', light)
        const overflow = await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth)
        await page.screenshot({ path: `${pictures}/relation-${light}-${size.name}.png`, fullPage: true })
        expect(overflow, 'sideways scroll in px').toBeLessThanOrEqual(0)
        await expectAccessible(page)
      }
  })

  // The next person finds an open run without readings of ours.
  await startRun(db, { benchId: 'bench-1', personId })
  db.$client.close()
})
