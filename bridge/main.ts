import { mkdirSync } from 'node:fs'
import { dirname } from 'node:path'
import pino from 'pino'
import * as z from 'zod'
import { createBridge } from './bridge.ts'
import { createOpenPort } from './instruments/open-port.ts'

const demoSecret = 'a-bridge-secret-for-the-demo-only'

const environmentSchema = z
  .object({
    NODE_ENV: z.enum(['development', 'production', 'test']).default('development'),
    /** A demo site runs on the default secret. */
    DEMO: z.stringbool().default(false),
    BRIDGE_HOST: z.string().min(1).default('127.0.0.1'),
    BRIDGE_PORT: z.coerce.number().int().min(0).max(65535).default(4310),
    BRIDGE_SECRET: z.string().min(16).default(demoSecret),
    BRIDGE_ID: z.string().min(1).default('room-1'),
    APP_URL: z.url().default('http://127.0.0.1:3000'),
    ALLOWED_ORIGINS: z
      .string()
      .default('http://127.0.0.1:3000,http://localhost:3000')
      .transform((list) =>
        list
          .split(',')
          .map((origin) => origin.trim())
          .filter((origin) => origin !== ''),
      ),
    SPOOL_URL: z.string().min(1).default('file:.data/bridge-spool.db'),
    SIMULATOR_LINK: z.string().min(1).optional(),
    LOG_LEVEL: z.enum(['debug', 'info', 'warn', 'error', 'silent']).default('info'),
  })
  .refine((env) => env.DEMO || env.NODE_ENV !== 'production' || env.BRIDGE_SECRET !== demoSecret, {
    path: ['BRIDGE_SECRET'],
    message: 'is the default one: set your own before you run a bridge in production',
  })

const parsed = environmentSchema.safeParse(process.env)
if (!parsed.success) {
  console.error(z.prettifyError(parsed.error))
  process.exit(2)
}
const environment = parsed.data
const log = pino({ level: environment.LOG_LEVEL })

const spoolFile = /^file:(?!\/\/)([^?]+)/.exec(environment.SPOOL_URL)?.[1]
if (spoolFile) mkdirSync(dirname(spoolFile), { recursive: true })

const bridge = await createBridge({
  openPort: createOpenPort(environment.SIMULATOR_LINK ? { link: environment.SIMULATOR_LINK } : {}),
  log,
  secret: environment.BRIDGE_SECRET,
  bridgeId: environment.BRIDGE_ID,
  appUrl: environment.APP_URL,
  allowedOrigins: environment.ALLOWED_ORIGINS,
  spoolUrl: environment.SPOOL_URL,
  cameraLink: environment.SIMULATOR_LINK,
  host: environment.BRIDGE_HOST,
  port: environment.BRIDGE_PORT,
})
log.info({ address: bridge.address }, 'Bridge listening')

const end = (exitCode: number) => {
  bridge.close().then(
    () => process.exit(exitCode),
    () => process.exit(1),
  )
}
for (const signal of ['SIGTERM', 'SIGINT'] as const) process.once(signal, () => end(0))
// A bridge that does not know what it is doing leaves nothing switched on.
process.once('uncaughtException', (error) => {
  log.fatal({ error: error.stack ?? String(error) }, 'The bridge failed and makes safe')
  end(1)
})
