import { mkdirSync } from 'node:fs'
import type { Page } from 'playwright/test'
import { expect, expectAccessible } from './fixtures.ts'

const pictures = 'test-results/pictures'
const sizes = [
  { name: '360', width: 360, height: 800 },
  { name: '1080p', width: 1920, height: 1080 },
]

/** Looks at the page in both room lights, on a phone and on a projector: no sideways scroll, nothing that axe finds. */
export async function expectEveryLook(page: Page, name: string): Promise<void> {
  mkdirSync(pictures, { recursive: true })
  for (const light of ['dark', 'lit'] as const)
    for (const size of sizes) {
      await page.setViewportSize(size)
      await page.getByRole('button', { name: light, exact: true }).click()
      await expect(page.locator('html')).toHaveAttribute('data-light', light)
      const overflow = await page.evaluate(() => document.documentElement.scrollWidth - window.innerWidth)
      await page.screenshot({ path: `${pictures}/${name}-${light}-${size.name}.png`, fullPage: true })
      expect(overflow, `sideways scroll in px, ${light} ${size.name}`).toBeLessThanOrEqual(0)
      await expectAccessible(page)
    }
}
