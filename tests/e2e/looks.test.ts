import { mkdirSync } from 'node:fs'
import { acknowledgeCautions, leave, set, takeControls, warmUp } from './bench-steps.ts'
import { expect, expectAccessible, test } from './fixtures.ts'

const sizes = [
  { name: '360', width: 360, height: 800 },
  { name: '1080p', width: 1920, height: 1080 },
]
const pictures = 'test-results/pictures'

test('Every page stands in both room lights, on a phone and on a projector, without a sideways scroll', async ({
  signInAs,
}) => {
  test.setTimeout(420_000)
  mkdirSync(pictures, { recursive: true })
  const operator = await signInAs('technician')
  await acknowledgeCautions(operator, 'bench-2')
  await takeControls(operator)
  await warmUp(operator)
  await set(operator, { volts: 200, amps: 2.2 })
  await expect(operator.getByText('Both channels are settled')).toBeVisible({ timeout: 40_000 })
  await operator.getByRole('button', { name: 'Capture' }).click()
  await operator.getByLabel('Reading 1, left edge in cm').fill('0.80')
  await operator.getByLabel('Reading 1, right edge in cm').fill('8.00')
  await operator.getByRole('button', { name: 'Enter edges' }).click()
  await expect(operator.getByText(/at 95 %/)).toBeVisible()

  // The bench stays open where it is operated: a bench whose page is gone trips.
  const page = await signInAs('technician')
  for (const light of ['dark', 'lit'] as const) {
    await page.getByRole('button', { name: light, exact: true }).click()
    await expect(page.locator('html')).toHaveAttribute('data-light', light)
    for (const [name, path] of [
      ['bench', '/benches/bench-2'],
      ['hall', '/hall'],
      ['log', '/benches/bench-2/log'],
      ['cautions', '/benches/bench-2/cautions'],
      ['account', '/account'],
    ] as const)
      for (const size of sizes)
        await test.step(`${name}, ${light}, ${size.name}`, async () => {
          await page.setViewportSize(size)
          const html = await (await page.request.get(path)).text()
          expect(html, 'the server renders the light').toContain(`data-light="${light}"`)
          await page.goto(path)
          await expect(page.getByRole('main')).toBeVisible()
          await page.waitForTimeout(700)
          const overflow = await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth)
          await page.screenshot({ path: `${pictures}/${name}-${light}-${size.name}.png` })
          expect(overflow, 'sideways scroll in px').toBeLessThanOrEqual(0)
          await expectAccessible(page)
        })
  }
  await leave(operator)
})

test('The sign-in page stands in both lights too, and keeps the light without an account', async ({
  page,
  site,
}) => {
  await page.goto(`${site.url}/sign-in`)
  await expectAccessible(page)
  await page.getByRole('button', { name: 'dark', exact: true }).click()
  await expect(page.locator('html')).toHaveAttribute('data-light', 'dark')
  await page.reload()
  await expect(page.locator('html')).toHaveAttribute('data-light', 'dark')
  await expectAccessible(page)
})
