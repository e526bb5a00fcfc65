import { defineConfig } from 'playwright/test'

export default defineConfig({
  testDir: './e2e',
  outputDir: '../test-results/browser',
  // Each worker starts a site of its own; two would share the two cores that one needs.
  workers: 1,
  retries: 0,
  timeout: 120_000,
  expect: { timeout: 10_000 },
  reporter: [['list'], ['json', { outputFile: '../test-results/browser.json' }]],
  use: {
    actionTimeout: 15_000,
    browserName: 'chromium',
    launchOptions: {
      executablePath: process.env.CHROMIUM ?? '/usr/bin/chromium',
      args: [
        '--no-sandbox',
        '--disable-gpu',
        '--disable-quic',
        '--no-first-run',
        '--disable-background-networking',
        '--disable-component-update',
        '--disable-sync',
      ],
    },
  },
})
