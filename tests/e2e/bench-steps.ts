import { expect, type Page } from 'playwright/test'
import { askSimulator } from '#tests/support/simulator-asks.ts'
import type { Site } from '#tests/support/site.ts'

/** Steps at a bench as a person takes them on its page. */
export async function acknowledgeCautions(page: Page, benchId: string): Promise<void> {
  await page.goto(`/benches/${benchId}/cautions`)
  const acknowledge = page.getByRole('button', { name: 'I have read these and will keep to them' })
  await expect(acknowledge.or(page.getByText('You have acknowledged these'))).toBeVisible()
  if (await acknowledge.isVisible()) await acknowledge.click()
  await page.goto(`/benches/${benchId}`)
}

export async function takeControls(page: Page): Promise<void> {
  await page.getByRole('button', { name: 'Take the controls' }).click()
  await expect(page.getByText('(you)')).toBeVisible()
}

export async function warmUp(page: Page): Promise<void> {
  const heaterOn = page.getByRole('button', { name: 'Heater on' })
  await expect(heaterOn.or(page.getByRole('button', { name: 'Heater off' }))).toBeVisible()
  if (await heaterOn.isVisible()) await heaterOn.click()
  await expect(page.getByText('Set the anode voltage')).toBeVisible({ timeout: 40_000 })
}

export const anodeField = (page: Page) => page.getByLabel(/^Anode.*, V, at most/i)
export const coilField = (page: Page) => page.getByLabel(/^Coil.*, A, at most/i)

export async function set(
  page: Page,
  { volts, amps }: { volts?: number | string; amps?: number | string },
): Promise<void> {
  if (volts !== undefined) {
    await anodeField(page).fill(String(volts))
    await anodeField(page).press('Enter')
  }
  if (amps !== undefined) {
    await coilField(page).fill(String(amps))
    await coilField(page).press('Enter')
  }
}

/** Leaves the bench as the next person wants to find it: everything off, nobody at the controls, no trip by a page that went. */
export async function leave(page: Page): Promise<void> {
  await page.getByRole('button', { name: /^Make safe/ }).click()
  await expect(page.getByRole('button', { name: 'Heater on' })).toBeVisible()
  await page.getByRole('button', { name: 'Release the controls' }).click()
  await expect(page.getByText('at the controls: nobody')).toBeVisible()
}

/** The voltage at the tube's anode as the simulator knows it. */
export async function terminalVolts(site: Site, benchId: string): Promise<number> {
  const { anodeVolts } = await askSimulator<{ anodeVolts: number }>(site.simulatorTest, 'terminal', benchId)
  return anodeVolts
}

export async function expectTerminal(site: Site, benchId: string, what: 'live' | 'down'): Promise<void> {
  const volts = expect.poll(() => terminalVolts(site, benchId), { timeout: 15_000 })
  if (what === 'live') await volts.toBeGreaterThan(90)
  else await volts.toBeLessThan(5)
}
