import { expectEveryLook } from './every-look.ts'
import { expect, test } from './fixtures.ts'

test('A technician sees how long a channel is best averaged, whether it drifts, and where the coils go', async ({
  signInAs,
}) => {
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
  await expectEveryLook(page, 'stability')
})
