import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { captureReplySchema } from '#app/protocol/commands.ts'
import {
  type BridgeSite,
  bringToLive,
  bringToReady,
  openSocket,
  type Page,
  people,
  signedPost,
  startBridgeSite,
  ticketOf,
  waitForState,
} from '#tests/support/bridge.ts'

let site: BridgeSite
let page: Page

beforeEach(async () => {
  site = await startBridgeSite()
  page = await openSocket(site.address, { ticket: ticketOf(people.student) })
})
afterEach(async () => {
  await page.close()
  await site.close()
})

const capture = async (actor = people.student) =>
  captureReplySchema.parse((await signedPost(site.address, '/benches/bench-1/captures', { actor })).body)

describe('A capture', () => {
  it('answers with the raw samples, statistics and states of the settled window', async () => {
    await bringToLive(site, page, people.student)
    await waitForState(
      page,
      ({ channels }) => channels.anodeVolts?.state === 'settled' && channels.coilAmps?.state === 'settled',
    )
    const reply = await capture()
    if (!reply.accepted) throw new Error(JSON.stringify(reply.refusals))
    const { times, samples, statistics, states, revision, polarity, windowSeconds } = reply.capture
    expect({ revision, polarity, windowSeconds }).toEqual({ revision: 1, polarity: 1, windowSeconds: 1.5 })
    expect((times.at(-1) ?? 0) - (times[0] ?? 0)).toBeCloseTo(1.5, 0)
    expect(samples.anodeVolts).toHaveLength(times.length)
    const raw = (samples.anodeVolts ?? []).filter((value) => value !== null)
    expect(raw.length).toBeGreaterThan(10)
    const mean = raw.reduce((sum, value) => sum + value, 0) / raw.length
    expect(statistics.anodeVolts?.mean).toBeCloseTo(mean, 9)
    expect(statistics.anodeVolts?.mean).toBeCloseTo(site.terminal().anodeVolts, 0)
    expect(statistics.coilAmps?.mean).toBeCloseTo(site.terminal().coilAmps, 2)
    expect(states.anodeVolts?.state).toBe('settled')
  })

  it('is refused while a channel is not settled, and says which and why', async () => {
    await bringToLive(site, page, people.student, { volts: 150 })
    const reply = await capture()
    expect(reply.accepted).toBe(false)
    if (reply.accepted) return
    expect(reply.refusals.map(({ code }) => code)).toContain('not-settled')
    expect(reply.refusals.map(({ sentence }) => sentence).join(' ')).toMatch(/Anode voltage \(meter\) is \w+/)
  })

  it('is refused with the anode off, and to a student who is not at the controls, and each is an event', async () => {
    await bringToReady(site, page, people.student)
    const reply = await capture(people.otherStudent)
    expect(reply.accepted).toBe(false)
    if (reply.accepted) return
    const codes = reply.refusals.map(({ code }) => code)
    expect(codes).toContain('not-permitted')
    expect(codes).toContain('not-at-the-controls')
    await waitForState(page, () => page.events().some(({ kind }) => kind === 'refusal'))
  })
})
