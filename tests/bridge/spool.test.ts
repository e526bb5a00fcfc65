import { mkdtempSync, rmSync } from 'node:fs'
import { tmpdir } from 'node:os'
import { join } from 'node:path'
import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import {
  accept,
  type BridgeSite,
  openSocket,
  type Page,
  people,
  startBridgeSite,
  ticketOf,
  waitUntilOff,
} from '#tests/support/bridge.ts'
import { until } from '#tests/support/processes.ts'

let site: BridgeSite
let page: Page

beforeEach(async () => {
  site = await startBridgeSite()
  page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
  await waitUntilOff(page)
})
afterEach(async () => {
  await page.close()
  await site.close()
})

/** Takes and releases the controls so often: twice as many events. */
async function makeEvents(times: number): Promise<void> {
  for (let i = 0; i < times; i++) {
    await accept(site.address, people.technician, { kind: 'take-controls' })
    await accept(site.address, people.technician, { kind: 'release-controls' })
  }
}

/** Every event that the page was shown is at the app, under the same number and with the same words. */
async function everyEventArrives(): Promise<void> {
  const { events } = site.receiver
  await until('every event', () => page.events().every(({ sequence }) => events.has(sequence)))
  for (const event of page.events()) expect(events.get(event.sequence)).toEqual(event)
}

function expectNoGap(numbers: Iterable<number>): void {
  const sorted = [...numbers].sort((a, b) => a - b)
  expect(sorted).toEqual(sorted.map((_, index) => index + 1))
}

const controlsEvents = () => [...site.receiver.events.values()].filter(({ kind }) => kind === 'controls')

describe('The spool', () => {
  it('sends events and summaries, numbered from one without gaps, until they are confirmed', async () => {
    await makeEvents(3)
    await until('the events', () => controlsEvents().length === 6)
    await until('summaries', () => site.receiver.summaries.size > 20)
    expectNoGap(site.receiver.events.keys())
    expectNoGap(site.receiver.summaries.keys())
    const volts = [...site.receiver.summaries.values()].filter(({ channel }) => channel === 'anodeVolts')
    for (const { min, mean, max, count } of volts) {
      expect(min).toBeLessThanOrEqual(mean)
      expect(mean).toBeLessThanOrEqual(max)
      expect(count).toBeGreaterThan(0)
    }
    // A second of 10 Hz that was whole.
    expect(Math.max(...volts.map(({ count }) => count))).toBeGreaterThanOrEqual(8)
    expect(site.receiver.failures).toEqual([])
  })

  it('keeps what the app does not take, over a restart, and loses and doubles nothing', async () => {
    site.receiver.behaviour.mode = 'drop'
    await makeEvents(3)
    expect(controlsEvents()).toHaveLength(0)
    const before = page.events()
    await page.close()
    await site.restart()
    page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
    await waitUntilOff(page)
    await makeEvents(2)
    site.receiver.behaviour.mode = 'confirm'
    await everyEventArrives()
    for (const event of before) expect(site.receiver.events.get(event.sequence)).toEqual(event)
    expect(controlsEvents()).toHaveLength(10)
    expectNoGap(site.receiver.events.keys())
    expect(site.receiver.failures).toEqual([])
  })

  it('sends again what was stored while the confirmation was lost, under the same numbers', async () => {
    site.receiver.behaviour.mode = 'store-and-drop'
    await makeEvents(2)
    await until('the events are stored', () => controlsEvents().length === 4)
    await page.close()
    await site.restart()
    page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
    await waitUntilOff(page)
    await makeEvents(1)
    site.receiver.behaviour.mode = 'confirm'
    await everyEventArrives()
    expect(controlsEvents()).toHaveLength(6)
    expectNoGap(site.receiver.events.keys())
    expect(site.receiver.failures).toEqual([])
  })

  it('does not give a number again that was confirmed before a restart', async () => {
    await makeEvents(1)
    await everyEventArrives()
    const highest = Math.max(...site.receiver.events.keys())
    await page.close()
    await site.restart()
    page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
    await waitUntilOff(page)
    await makeEvents(1)
    await everyEventArrives()
    expect(Math.min(...page.events().map(({ sequence }) => sequence))).toBeGreaterThan(highest)
    expectNoGap(site.receiver.events.keys())
    expect(site.receiver.failures).toEqual([])
  })

  it('that was lost goes on behind the numbers that the app has, and overwrites nothing', async () => {
    await makeEvents(2)
    await everyEventArrives()
    const before = new Map(site.receiver.events)
    await page.close()
    const directory = mkdtempSync(join(tmpdir(), 'bridge-spool-'))
    await site.restart({ spoolUrl: `file:${join(directory, 'spool.db')}` })
    page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
    await waitUntilOff(page)
    await makeEvents(3)
    // The first batch after the loss bears numbers that the app knows, and must not count as taken.
    await until('the events', () => [...site.receiver.events.keys()].length >= before.size + 6)
    for (const [sequence, event] of before) expect(site.receiver.events.get(sequence)).toEqual(event)
    expectNoGap(site.receiver.events.keys())
    await site.bridge.close()
    rmSync(directory, { recursive: true, force: true })
    await site.restart()
  })
})
