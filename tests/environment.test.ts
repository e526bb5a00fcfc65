import { afterEach, beforeEach, describe, expect, it, vi } from 'vitest'
import { startProcess } from '#tests/support/processes.ts'

beforeEach(() => vi.resetModules())
afterEach(() => vi.unstubAllEnvs())

async function parse(env: Record<string, string>) {
  for (const [name, value] of Object.entries(env)) vi.stubEnv(name, value)
  const { environment } = await import('#app/env.server.ts')
  return environment()
}

describe('The environment of the app', () => {
  it('needs nothing set for a demo', async () => {
    expect(await parse({ DEMO: '1', NODE_ENV: 'production' })).toMatchObject({ DEMO: true })
  })

  it('refuses the default secrets in production, each by its name', async () => {
    await expect(parse({ DEMO: '0', NODE_ENV: 'production' })).rejects.toThrow(
      /SESSION_SECRET[\s\S]*BRIDGE_SECRET|BRIDGE_SECRET[\s\S]*SESSION_SECRET/,
    )
    vi.resetModules()
    await expect(
      parse({ DEMO: '0', NODE_ENV: 'production', SESSION_SECRET: 'a-secret-of-our-own-and-long' }),
    ).rejects.toThrow(/BRIDGE_SECRET/)
  })

  it('runs in production on secrets of its own', async () => {
    const secrets = {
      SESSION_SECRET: 'a-secret-of-our-own-and-long',
      BRIDGE_SECRET: 'another-secret-of-our-own',
    }
    expect(await parse({ DEMO: '0', NODE_ENV: 'production', ...secrets })).toMatchObject(secrets)
  })
})

describe('The environment of the bridge', () => {
  it('refuses the default secret in production and ends with a reason', async () => {
    const bridge = startProcess('bridge', ['--import', 'tsx', 'bridge/main.ts'], {
      env: { NODE_ENV: 'production', DEMO: '0', BRIDGE_PORT: '0', SPOOL_URL: ':memory:' },
    })
    await vi.waitFor(() => expect(bridge.child.exitCode).toBe(2), { timeout: 15_000 })
    expect(bridge.output()).toMatch(/BRIDGE_SECRET/)
  })
})
