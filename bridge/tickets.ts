import { createHmac, timingSafeEqual } from 'node:crypto'
import { type Ticket, ticketSchema } from '#app/protocol/commands.ts'
import { resumeSeconds, ticketSeconds } from '#app/protocol/signing.ts'

const hmac = (secret: string, text: string): Buffer => createHmac('sha256', secret).update(text).digest()

/** Whether `signature` is the hex HMAC-SHA256 of the text, in a time that does not depend on where it differs. */
export function isSignatureOf(secret: string, text: string, signature: string): boolean {
  if (!/^[0-9a-f]{64}$/.test(signature)) return false
  return timingSafeEqual(hmac(secret, text), Buffer.from(signature, 'hex'))
}

export const signatureOf = (secret: string, text: string): string => hmac(secret, text).toString('hex')

/** A ticket as it travels: base64url of its JSON, a dot, its signature. */
export function writeTicket(secret: string, ticket: Ticket): string {
  const text = Buffer.from(JSON.stringify(ticket)).toString('base64url')
  return `${text}.${signatureOf(secret, text)}`
}

export type TicketCheck = {
  secret: string
  use: Ticket['use']
  /** Seconds since 1970. */
  now: number
  /** When this person's tickets and keys were last revoked, in seconds since 1970; null when never. */
  revokedAt: (personId: string) => number | null
}

// A ticket of an app whose clock runs a little ahead is still good.
const clockSkewSeconds = 5

/** The ticket, or the reason why it is not good: forged, of the other use, too old, revoked. */
export function readTicket(
  text: string,
  check: TicketCheck,
): { ok: true; ticket: Ticket } | { ok: false; reason: string } {
  const [body = '', signature = '', ...more] = text.split('.')
  if (more.length > 0 || !isSignatureOf(check.secret, body, signature)) {
    return { ok: false, reason: 'The ticket is not signed by this site.' }
  }
  let raw: unknown
  try {
    raw = JSON.parse(Buffer.from(body, 'base64url').toString('utf8'))
  } catch {
    return { ok: false, reason: 'The ticket cannot be read.' }
  }
  const parsed = ticketSchema.safeParse(raw)
  if (!parsed.success) return { ok: false, reason: 'The ticket cannot be read.' }
  const ticket = parsed.data
  if (ticket.use !== check.use) return { ok: false, reason: 'The ticket is for another use.' }
  const longest = ticket.use === 'ticket' ? ticketSeconds : resumeSeconds
  const expiresAt = Math.min(ticket.expiresAt, ticket.issuedAt + longest)
  if (check.now >= expiresAt || ticket.issuedAt > check.now + clockSkewSeconds) {
    return { ok: false, reason: 'The ticket has expired.' }
  }
  const revokedAt = check.revokedAt(ticket.personId)
  if (revokedAt !== null && ticket.issuedAt <= revokedAt) {
    return { ok: false, reason: 'The ticket was revoked.' }
  }
  return { ok: true, ticket }
}

/**
 * A key with which the same page reconnects while the app is away: to watch and to make safe. A page that came with a
 * key gets the same one again, so that it ends twelve hours after the app's own word.
 */
export function resumeKeyFor(secret: string, ticket: Ticket, now: number): string {
  if (ticket.use === 'resume') return writeTicket(secret, ticket)
  return writeTicket(secret, {
    ...ticket,
    use: 'resume',
    issuedAt: now,
    expiresAt: now + resumeSeconds,
  })
}
