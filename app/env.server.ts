import { existsSync } from 'node:fs'
import * as z from 'zod'

const defaultSessionSecret = 'a-session-secret-for-the-demo-only'
const defaultBridgeSecret = 'a-bridge-secret-for-the-demo-only'

const environmentSchema = z
  .object({
    NODE_ENV: z.enum(['development', 'production', 'test']).default('development'),
    /** A demo site: shows its accounts on the sign-in page and runs on the default secrets. */
    DEMO: z.stringbool().default(false),
    DATABASE_URL: z.string().default('file:.data/coilside.db'),
    /** Where photos are kept. By default the folder `files` beside the database, or in `.data` where that is no file. */
    FILES_DIR: z.string().min(1).optional(),
    SESSION_SECRET: z.string().min(16).default(defaultSessionSecret),
    BRIDGE_SECRET: z.string().min(16).default(defaultBridgeSecret),
    BRIDGE_URL: z.url().default('http://127.0.0.1:4310'),
    /** Where browsers reach the bridge. By default the host that the page was asked of, on the bridge's port. */
    BRIDGE_PUBLIC_URL: z.url().optional(),
    SMTP_URL: z.string().default('smtp://127.0.0.1:2525'),
    MAIL_FROM: z.string().default('Coilside <coilside@lab.test>'),
    /** The address of the site as people type it, for links in e-mail. */
    SITE_URL: z.url().default('http://127.0.0.1:3000'),
  })
  .refine((env) => env.DEMO || env.NODE_ENV !== 'production' || env.SESSION_SECRET !== defaultSessionSecret, {
    path: ['SESSION_SECRET'],
    message: 'is the default one: set your own before you run Coilside in production',
  })
  .refine((env) => env.DEMO || env.NODE_ENV !== 'production' || env.BRIDGE_SECRET !== defaultBridgeSecret, {
    path: ['BRIDGE_SECRET'],
    message: 'is the default one: set your own before you run Coilside in production',
  })

type Environment = z.infer<typeof environmentSchema>

/** For commands that are not started by `npm start`: what stands in `.env`, where the environment does not say otherwise. */
export function readEnvironmentFile(): void {
  if (existsSync('.env')) process.loadEnvFile('.env')
}

let parsed: Environment | undefined

/** The environment, parsed once. Throws with every fault named. */
export function environment(): Environment {
  if (!parsed) {
    const result = environmentSchema.safeParse(process.env)
    if (!result.success) throw new Error(`The environment is not usable:\n${z.prettifyError(result.error)}`)
    parsed = result.data
  }
  return parsed
}
