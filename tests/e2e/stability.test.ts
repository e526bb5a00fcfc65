import { mkdirSync } from 'node:fs'
import { expect, expectAccessible, test } from './fixtures.ts'

const pictures = 'test-results/pictures'

test('A technician sees how long a channel is best averaged, whether it drifts, and where the coils go', async ({
  signInAs,
}) => {
  mkdirSync(pictures, { recursive: true })
  const page = await signInAs('technician', { path: '/benches/bench-3' })
  await page.getByRole('link', { name: 'stability', exact: true }).click()
  await expect(page.getByRole('heading', { name: 'Stability of Bench 3' })).toBeVisible()
  await expect(page.getByText(/The coils have \d+\.\d °C at \d\.\d\d A/)).toBeVisible()
  await page.getByLabel('channel').selectOption({ label: 'coil current, by its meter' })
  // The page has what the bridge kept; a site that has just been started has little of it.
  await expect(async () => {
    await page.getByRole('button', { name: 'Take what is recorded' }).click()
    await expect(page.getByText(/It is steadiest averaged over/)).toBeVisible({ timeout: 500 })
  }).toPass({ timeout: 30_000, intervals: [1_000] })
  await expect(page.getByText(/No trend is told|It (rises|falls) by/)).toBeVisible()
  await page.getByText('as a table').click()
  await expect(page.getByRole('columnheader', { name: 'averaging time, s' })).toBeVisible()
  for (const light of ['dark', 'lit'] as const)
    for (const size of [
      { name: '360', width: 360, height: 800 },
      { name: '1080p', width: 1920, height: 1080 },
    ]) {
      await page.setViewportSize(size)
      await page.getByRole('button', { name: light, exact: true }).click()
      await expect(page.locator('html')).toHaveAttribute('data-light', light)
      const overflow = await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth)
      await page.screenshot({ path: `${pictures}/stability-${light}-${size.name}.png`, fullPage: true })
      expect(overflow, 'sideways scroll in px').toBeLessThanOrEqual(0)
      await expectAccessible(page)
    }
})
