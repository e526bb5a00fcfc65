import { mkdtempSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { asc, eq } from 'drizzle-orm'
import pino from 'pino'
import { afterAll, beforeAll, describe, expect, it, vi } from 'vitest'
import { startSession } from '#app/auth/sessions.server.ts'
import type { ActionReply } from '#app/benches/action-reply.ts'
import { loadBenchView } from '#app/benches/bench-view.server.ts'
import { requireRuler } from '#app/benches/scale.ts'
import type { Person } from '#app/context.ts'
import { benchCommands, benchEvents, benchRevisions, channelSummaries } from '#app/db/schema.ts'
import { acceptedChargeToMass } from '#app/physics/accepted-value.ts'
import { type Bridge, createBridge } from '#bridge/bridge.ts'
import { createOpenPort } from '#bridge/instruments/open-port.ts'
import { demoScenario } from '#bridge/simulator/scenario.ts'
import { createSimulator, type Simulator } from '#bridge/simulator/simulator.ts'
import { type AppHandler, startApp } from '#tests/support/app-handler.ts'
import { openSocket, type Page, quickBench, waitForState } from '#tests/support/bridge.ts'
import { type ClassSite, openClassSite } from '#tests/support/class-site.ts'
import { ownDatabaseUrl } from '#tests/support/database.ts'
import { freePort, until } from '#tests/support/processes.ts'

const secret = 'a-secret-of-this-test-only'
let simulator: Simulator
let bridge: Bridge
let app: AppHandler
let origin: string
let site: ClassSite
let page: Page

/** Simulator, bridge and application as a demo site has them, over real sockets; the bench warms up and settles quickly. */
beforeAll(async () => {
  const port = await freePort()
  vi.stubEnv('DATABASE_URL', ownDatabaseUrl())
  vi.stubEnv('BRIDGE_SECRET', secret)
  vi.stubEnv('BRIDGE_URL', `http://127.0.0.1:${port}`)
  site = await openClassSite()
  await site.db
    .update(benchRevisions)
    .set({ config: quickBench() })
    .where(eq(benchRevisions.benchId, 'bench-1'))
  app = await startApp()
  origin = await app.listen()
  simulator = createSimulator({ scenario: demoScenario, seed: 3 })
  const { link } = await simulator.listen({ link: '127.0.0.1:0' })
  bridge = await createBridge({
    openPort: createOpenPort({ link: link ?? '' }),
    log: pino({ level: 'silent' }),
    secret,
    bridgeId: 'room-1',
    appUrl: origin,
    allowedOrigins: [origin],
    spoolUrl: `file:${join(mkdtempSync(join(tmpdir(), 'coilside-')), 'spool.db')}`,
    host: '127.0.0.1',
    port,
  })
}, 60_000)
afterAll(async () => {
  await page?.close()
  await bridge.close()
  await app.close()
  await simulator.close()
})

async function post(person: Person, path: string, fields: Record<string, string> = {}) {
  const cookie = (await startSession(person.id)).split(';')[0] ?? ''
  const response = await fetch(origin + path, {
    method: 'POST',
    headers: { Cookie: cookie, Origin: origin },
    body: new URLSearchParams(fields),
    redirect: 'manual',
  })
  const text = await response.text()
  return {
    status: response.status,
    reply: (text ? JSON.parse(text) : null) as ActionReply & { ticket: string },
  }
}
const command = (person: Person, fields: Record<string, string>) =>
  post(person, '/benches/bench-1/commands', fields)
const view = () => loadBenchView(site.db, { benchId: 'bench-1', person: site.student })

const codesOf = (reply: ActionReply) => (reply.ok ? [] : reply.refusals.map(({ code }) => code))

describe('A bench with its bridge', () => {
  it('lets a page with the application’s ticket watch', async () => {
    const { reply } = await post(site.student, '/api/tickets', { benchId: 'bench-1' })
    page = await openSocket(bridge.address, { ticket: reply.ticket }, { origin })
    expect(page.hello).toMatchObject({ personId: site.student.id, benchIds: ['bench-1'] })
    // The bridge has fetched the bench's revision from the application.
    expect(await waitForState(page, ({ phase }) => phase === 'off')).toMatchObject({ revision: 1 })
  })

  it('gives the controls only after the cautions are acknowledged', async () => {
    const before = await command(site.student, { kind: 'take-controls' })
    expect(before.status).toBe(409)
    expect(codesOf(before.reply)).toEqual(['not-acknowledged'])
    expect((await fetchCautions()).status).toBe(302)
    expect((await view()).cautionsAcknowledged).toBe(true)
    expect((await command(site.student, { kind: 'take-controls' })).reply).toMatchObject({ ok: true })
    page.stay()
  })

  it('refuses a setpoint above the bench’s limit in the bridge’s sentence, and notes it', async () => {
    const { status, reply } = await command(site.student, { kind: 'set-anode', volts: '1000' })
    expect(status).toBe(409)
    expect(codesOf(reply)).toContain('above-limit')
    expect(reply).toMatchObject({
      refusals: expect.arrayContaining([{ code: 'above-limit', sentence: expect.stringContaining('300 V') }]),
    })
    const noted = await site.db.query.benchCommands.findFirst({ where: eq(benchCommands.kind, 'set-anode') })
    expect(noted).toMatchObject({ asked: { volts: 1000 }, outcome: 'refused' })
  })

  it('is brought up, captured when settled, and gives e/m from the edges within its uncertainty', async () => {
    expect((await post(site.student, '/benches/bench-1/readings')).status).toBe(409)
    expect((await command(site.student, { kind: 'switch-heater', on: 'true' })).status).toBe(200)
    await waitForState(page, ({ phase }) => phase === 'ready')
    expect((await command(site.student, { kind: 'set-coils', amps: '1,5' })).status).toBe(200)
    expect((await command(site.student, { kind: 'set-anode', volts: '200' })).status).toBe(200)
    await waitForState(page, ({ anode, coils }) => anode.commanded === 200 && coils.commanded === 1.5)
    const taken = await until(
      'the bench settles and is captured',
      async () => {
        const { reply } = await post(site.student, '/benches/bench-1/readings')
        return reply.ok ? reply : null
      },
      15_000,
    )
    expect(taken.answer).toBe('Captured as reading 1. Now read both edges.')

    const [reading] = (await view()).readings
    const asked = simulator.ask({ id: 1, bench: 'bench-1', ask: 'turning-points' })
    const { leftMetres, rightMetres } = (asked.ok ? asked.answer : {}) as Partial<Record<string, number>>
    const zero = requireRuler(quickBench()).zeroMetres
    // As an eye reads them: to half a millimetre on the scale.
    const asRead = (metres = Number.NaN) => (Math.round((metres - zero) * 2000) / 20).toFixed(2)
    const edges = { left: asRead(leftMetres), right: asRead(rightMetres) }
    expect((await post(site.student, `/benches/bench-1/readings/${reading?.id}/edges`, edges)).status).toBe(
      200,
    )
    const { result } = (await view()).readings[0] ?? {}
    const off = (result?.chargeToMass ?? 0) - acceptedChargeToMass.value
    expect(Math.abs(off)).toBeLessThan(result?.expandedUncertainty ?? 0)
    expect((result?.standardUncertainty ?? 1) / acceptedChargeToMass.value).toBeLessThan(0.03)
  })

  it('goes to an instructor who takes over, and not to a partner', async () => {
    await fetchCautions(site.instructor)
    await fetchCautions(site.partner)
    expect((await command(site.partner, { kind: 'take-over' })).status).toBe(403)
    expect(codesOf((await command(site.partner, { kind: 'take-controls' })).reply)).toEqual([
      'controls-taken',
    ])
    expect((await command(site.instructor, { kind: 'take-over' })).status).toBe(200)
    await waitForState(page, ({ controls }) => controls?.personId === site.instructor.id)
    expect(codesOf((await command(site.student, { kind: 'set-anode', volts: '100' })).reply)).toContain(
      'not-at-the-controls',
    )
  })

  it('is made safe by any watcher, and with the whole room by staff', async () => {
    expect((await command(site.partner, { kind: 'make-safe' })).reply).toMatchObject({ ok: true })
    await waitForState(
      page,
      ({ phase, anodeMeasured }) => phase === 'off' && (anodeMeasured?.volts ?? 99) < 5,
    )
    const room = await post(site.technician, '/make-safe')
    expect(room.status).toBe(200)
    expect(room.reply).toMatchObject({ ok: true, answer: expect.stringContaining('Bench 2: ') })
  })

  it('has told the application everything once: events and summaries without a gap', async () => {
    const events = await until('the make safe arrives in the log', async () => {
      const rows = await site.db.select().from(benchEvents).orderBy(asc(benchEvents.sequence))
      return rows.filter(({ kind }) => kind === 'make-safe').length >= 2 ? rows : null
    })
    expect(events.map(({ sequence }) => sequence)).toEqual(events.map((_, index) => index + 1))
    const summaries = await site.db
      .select({ sequence: channelSummaries.sequence })
      .from(channelSummaries)
      .orderBy(asc(channelSummaries.sequence))
    expect(summaries.map(({ sequence }) => sequence)).toEqual(summaries.map((_, index) => index + 1))
    expect(
      (await view()).log.some(({ sentence }) => /took the controls over from Kofi Adeyemi/.test(sentence)),
    ).toBe(true)
  })
})

async function fetchCautions(person: Person = site.student) {
  const cookie = (await startSession(person.id)).split(';')[0] ?? ''
  const response = await fetch(`${origin}/benches/bench-1/cautions`, {
    method: 'POST',
    headers: { Cookie: cookie, Origin: origin },
    redirect: 'manual',
  })
  await response.text()
  return response
}
