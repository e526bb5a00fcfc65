import { defineConfig } from 'vitest/config'

export default defineConfig({
  root: '.',
  test: {
    include: ['tests/**/*.test.ts', 'tests/**/*.test.tsx'],
    exclude: ['tests/e2e/**', 'node_modules/**'],
    // Two cores are shared with the servers that the integration tests start.
    maxWorkers: 2,
    testTimeout: 20_000,
    hookTimeout: 30_000,
  },
})
