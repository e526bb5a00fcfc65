import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { AxeBuilder } from '@axe-core/playwright'
import { test as base, expect, type Page } from 'playwright/test'
import { demoAccounts } from '#app/db/demo-accounts.server.ts'
import { type Site, startSite } from '#tests/support/site.ts'

type Role = 'student' | 'instructor' | 'technician'
type Fixtures = {
  /** Console errors that belong to the story: by default a refusal, which the browser logs as a failed request. */
  faultsAllowed: RegExp
  /** A page signed in through the form as the demo's person of that role, with console errors failing the test. */
  signInAs: (
    role: Role,
    options?: { path?: string; email?: string; deviceScaleFactor?: number },
  ) => Promise<Page>
}

export const test = base.extend<Fixtures, { site: Site }>({
  faultsAllowed: [/the server responded with a status of 4\d\d/, { option: true }],
  site: [
    async ({ browserName: _ }, use) => {
      const dataDir = mkdtempSync(join(tmpdir(), 'coilside-e2e-'))
      const site = await startSite({ dataDir })
      await use(site)
      await site.close()
      rmSync(dataDir, { recursive: true, force: true })
    },
    { scope: 'worker', timeout: 120_000 },
  ],
  signInAs: async ({ browser, site, faultsAllowed }, use) => {
    const contexts: Awaited<ReturnType<typeof browser.newContext>>[] = []
    const faults: string[] = []
    await use(async (role, { path = '/hall', email, deviceScaleFactor = 1 } = {}) => {
      const context = await browser.newContext({
        baseURL: site.url,
        viewport: { width: 1280, height: 900 },
        deviceScaleFactor,
      })
      contexts.push(context)
      const page = await context.newPage()
      page.on('console', (message) => message.type() === 'error' && faults.push(message.text()))
      page.on('pageerror', (error) => faults.push(String(error)))
      const account = demoAccounts.find((it) => (email ? it.email === email : it.role === role))
      if (!account) throw new Error(`The demo has no ${role}`)
      await page.goto(`/sign-in?returnTo=${encodeURIComponent(path)}`)
      await page.getByLabel('E-mail').fill(account.email)
      await page.getByLabel('Password').fill(account.password)
      await page.getByRole('button', { name: 'Sign in' }).click()
      await page.waitForURL(`**${path}`)
      return page
    })
    for (const context of contexts) await context.close()
    expect(
      faults.filter((fault) => !faultsAllowed.test(fault)),
      'errors in the browser console',
    ).toEqual([])
  },
})

export { expect }

/** Fails on any breach of WCAG 2.1 A and AA that axe finds on the page as it is now. */
export async function expectAccessible(page: Page): Promise<void> {
  const { violations } = await new AxeBuilder({ page })
    .withTags(['wcag2a', 'wcag2aa', 'wcag21a', 'wcag21aa'])
    .analyze()
  expect(violations.map(({ id, nodes }) => `${id}: ${nodes.map(({ html }) => html).join(' | ')}`)).toEqual([])
}
