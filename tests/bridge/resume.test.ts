import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { WebSocket } from 'ws'
import {
  type BridgeSite,
  openSocket,
  people,
  signedPost,
  startBridgeSite,
  ticketOf,
  waitForState,
  writeTicket,
} from '#tests/support/bridge.ts'
import { until } from '#tests/support/processes.ts'

let site: BridgeSite

beforeEach(async () => {
  site = await startBridgeSite()
})
afterEach(() => site.close())

const now = () => Date.now() / 1000

describe('A resume key', () => {
  it('connects again with the app gone, and after a restart of the bridge, to watch and to make safe', async () => {
    const first = await openSocket(site.address, { ticket: ticketOf(people.student) })
    const { resumeKey } = first.hello
    await first.close()
    await site.receiver.close()
    const second = await openSocket(site.address, { resume: resumeKey })
    expect(second.hello.personId).toBe(people.student.personId)
    await second.close()
    await site.restart()
    const third = await openSocket(site.address, { resume: resumeKey })
    // The configuration comes from the spool: there is no app.
    await waitForState(third, ({ phase }) => phase === 'off')
    third.send({ type: 'make-safe', version: 1, benchId: 'bench-1' })
    const event = await until('make safe', () => third.events().find(({ kind }) => kind === 'make-safe'))
    expect(event.personId).toBe(people.student.personId)
    await third.close()
  })

  it('is refused when it is expired, forged, or a ticket', async () => {
    const refused = (resume: string) =>
      expect(openSocket(site.address, { resume })).rejects.toThrow('HTTP 401')
    const resume = { use: 'resume' as const }
    await refused(writeTicket({ ...resume, issuedAt: now() - 12 * 3600 - 1, expiresAt: now() - 1 }))
    await refused(writeTicket({ ...resume, issuedAt: now() - 12 * 3600 - 1, expiresAt: now() + 1e6 }))
    await refused(writeTicket({ ...resume, expiresAt: now() + 1000 }, 'a-secret-of-somebody-else'))
    await refused(ticketOf(people.student))
  })

  it('is refused once the person is revoked, also after a restart, and the page that is open is closed', async () => {
    const page = await openSocket(site.address, { ticket: ticketOf(people.student) })
    const other = await openSocket(site.address, { ticket: ticketOf(people.instructor) })
    const { status } = await signedPost(site.address, '/revocations', { personId: people.student.personId })
    expect(status).toBe(200)
    await until('the closing', () => page.socket.readyState === WebSocket.CLOSED)
    expect(page.messages.at(-1)?.type).toBe('bye')
    expect(other.socket.readyState).toBe(WebSocket.OPEN)
    const { resumeKey } = page.hello
    await expect(openSocket(site.address, { resume: resumeKey })).rejects.toThrow('HTTP 401')
    await other.close()
    await site.restart()
    await expect(openSocket(site.address, { resume: resumeKey })).rejects.toThrow('HTTP 401')
    const kept = await openSocket(site.address, { resume: other.hello.resumeKey })
    await kept.close()
    const fresh = await openSocket(site.address, { ticket: ticketOf(people.student) })
    await fresh.close()
  })
})
