import { mkdirSync } from 'node:fs'
import { networkInterfaces } from 'node:os'
import { join } from 'node:path'
import { type MailCatcher, startMailCatcher } from './mail-catcher.ts'
import { freePort, type Process, startProcess, until } from './processes.ts'

export type SiteOptions = {
  /** Where the database and the bridge's spool live. */
  dataDir: string
  ports?: { app: number; bridge: number; mail: number }
  host?: string
  /** Runs the sources with reloading in place of the build. */
  isDev?: boolean
  isLoud?: boolean
  env?: Record<string, string>
  onMail?: (mail: { to: string; subject: string }) => void
}

const parts = ['simulator', 'bridge', 'app'] as const
type Part = (typeof parts)[number]

/** A whole site as it runs: simulator, bridge, app and mail catcher, each a process of its own but the last. */
export type Site = {
  url: string
  bridgeUrl: string
  databaseUrl: string
  simulatorTest: { host: string; port: number }
  mail: MailCatcher
  processes: Record<Part, Process>
  /** Ends one part with a signal; `start` brings it back with the same ports and files. */
  stop: (part: Part, signal?: NodeJS.Signals) => Promise<void>
  start: (part: Part) => Promise<void>
  close: () => Promise<void>
}

/** Migrates, seeds and starts a demo site, and waits until its app and bridge answer. Needs `npm run build` unless `isDev`. */
export async function startSite({
  dataDir,
  ports,
  host = '127.0.0.1',
  isDev,
  isLoud,
  env = {},
  onMail,
}: SiteOptions): Promise<Site> {
  mkdirSync(dataDir, { recursive: true })
  const {
    app,
    bridge,
    mail: mailPort,
  } = ports ?? { app: await freePort(), bridge: await freePort(), mail: 0 }
  const link = await freePort()
  const test = await freePort()
  const mail = await startMailCatcher(mailPort, onMail)
  const url = `http://127.0.0.1:${app}`
  const bridgeUrl = `http://127.0.0.1:${bridge}`
  const databaseUrl = `file:${join(dataDir, 'coilside.db')}`
  const environment: Record<string, string> = {
    NODE_ENV: isDev ? 'development' : 'production',
    DEMO: '1',
    HOST: host,
    PORT: String(app),
    SITE_URL: url,
    DATABASE_URL: databaseUrl,
    BRIDGE_URL: bridgeUrl,
    SMTP_URL: `smtp://127.0.0.1:${mail.port}`,
    BRIDGE_ID: 'room-1',
    BRIDGE_HOST: host,
    BRIDGE_PORT: String(bridge),
    BRIDGE_SECRET: 'a-bridge-secret-for-the-demo-only',
    APP_URL: url,
    ALLOWED_ORIGINS: origins(app, host).join(','),
    SPOOL_URL: `file:${join(dataDir, 'bridge-spool.db')}`,
    SIMULATOR_LINK: `127.0.0.1:${link}`,
    SIMULATOR_TEST: `127.0.0.1:${test}`,
    SIMULATOR_SEED: '1',
    ...env,
  }

  const commands: Record<Part, string[]> = isDev
    ? {
        simulator: ['--import', 'tsx', 'bridge/simulator/main.ts'],
        bridge: ['--import', 'tsx', 'bridge/main.ts'],
        app: ['node_modules/@react-router/dev/bin.js', 'dev', '--port', String(app), '--host', host],
      }
    : {
        simulator: ['build/bridge/simulator/main.js'],
        bridge: ['build/bridge/main.js'],
        app: ['node_modules/@react-router/serve/bin.js', 'build/server/index.js'],
      }

  const seed = startProcess('seed', ['--import', 'tsx', 'app/db/seed.server.ts'], {
    env: environment,
    isLoud,
  })
  await until('the seed ends', () => seed.child.exitCode !== null || seed.child.signalCode !== null, 60_000)
  if (seed.child.exitCode !== 0) throw new Error(`The demo site could not be seeded:\n${seed.output()}`)

  const processes = {} as Record<Part, Process>
  const answers = async (address: string) => (await fetch(address).catch(() => null))?.ok ?? false
  const start = async (part: Part) => {
    const started = startProcess(part, commands[part], { env: environment, isLoud })
    processes[part] = started
    const isUp = {
      simulator: () => started.output().includes('\n'),
      bridge: () => answers(`${bridgeUrl}/health`),
      app: () => answers(`${url}/api/health`),
    }[part]
    await until(
      `the ${part} answers`,
      async () => {
        if (started.child.exitCode !== null)
          throw new Error(`The ${part} ended at its start:\n${started.output()}`)
        return isUp()
      },
      60_000,
    )
  }
  const stop = async (part: Part, signal?: NodeJS.Signals) => processes[part]?.stop(signal)

  const site: Site = {
    url,
    bridgeUrl,
    databaseUrl,
    simulatorTest: { host: '127.0.0.1', port: test },
    mail,
    processes,
    start,
    stop,
    // The bridge first: it makes its benches safe while there is something left to command.
    async close() {
      for (const part of ['bridge', 'app', 'simulator'] as const) await stop(part)
      await mail.close()
    },
  }
  try {
    for (const part of ['simulator', 'app', 'bridge'] as const) await start(part)
  } catch (error) {
    await site.close()
    throw error
  }
  return site
}

/** The addresses that a browser may come from: this machine's own, and the network's when the site listens there. */
function origins(port: number, host: string): string[] {
  const names = ['127.0.0.1', 'localhost', '[::1]']
  if (host === '0.0.0.0')
    for (const addresses of Object.values(networkInterfaces()))
      for (const { address, family } of addresses ?? [])
        names.push(family === 'IPv6' ? `[${address}]` : address)
  else if (!names.includes(host)) names.push(host)
  return [...new Set(names)].map((name) => `http://${name}:${port}`)
}
