import { createHash } from 'node:crypto'
import { createCookie } from 'react-router'
import * as z from 'zod'
import { environment } from '../env.server.ts'
import { isHttps } from './sessions.server.ts'

const mostAccounts = 20

/**
 * The accounts that have signed in from this browser. Their attempts from here are counted apart, so that nobody keeps
 * another out by typing wrong passwords for them elsewhere.
 */
const cookie = () =>
  createCookie('coilside_known', {
    path: '/',
    httpOnly: true,
    sameSite: 'lax',
    secure: isHttps(),
    secrets: [environment().SESSION_SECRET],
    maxAge: 365 * 86_400,
  })

const mark = (email: string) => createHash('sha256').update(email).digest('base64url').slice(0, 16)

async function readMarks(request: Request): Promise<string[]> {
  const parsed = z.array(z.string()).safeParse(await cookie().parse(request.headers.get('Cookie')))
  return parsed.success ? parsed.data : []
}

export async function isKnownBrowser(request: Request, email: string): Promise<boolean> {
  return (await readMarks(request)).includes(mark(email))
}

/** The Set-Cookie that makes this browser known for one more account. */
export async function knownBrowserCookie(request: Request, email: string): Promise<string> {
  const others = (await readMarks(request)).filter((other) => other !== mark(email))
  return cookie().serialize([mark(email), ...others].slice(0, mostAccounts))
}
