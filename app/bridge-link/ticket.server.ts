import { may } from '../auth/capabilities.ts'
import type { Person } from '../context.ts'
import type { Ticket } from '../protocol/commands.ts'
import { ticketSeconds } from '../protocol/signing.ts'
import { signText } from './signature.server.ts'

/**
 * A ticket for the bridge's telemetry: the person, their role, and the benches they may watch, signed; good for one minute.
 * @param request.benchIds null for every bench of the room
 */
export function makeTicket(request: {
  person: Pick<Person, 'id' | 'name' | 'role'>
  benchIds: string[] | null
  secret: string
  now?: number
}): string {
  const { person, benchIds } = request
  const issuedAt = request.now ?? Date.now() / 1000
  const ticket: Ticket = {
    use: 'ticket',
    personId: person.id,
    name: person.name,
    role: person.role,
    benchIds,
    room: may(person.role, 'make-room-safe'),
    issuedAt,
    expiresAt: issuedAt + ticketSeconds,
  }
  const text = Buffer.from(JSON.stringify(ticket)).toString('base64url')
  return `${text}.${signText(text, request.secret)}`
}
