import { afterAll, beforeAll, beforeEach, describe, expect, it } from 'vitest'
import {
  accept,
  bringUpLive,
  openSocket,
  type Page,
  people,
  quickBench,
  ticketOf,
  waitForState,
  waitUntilOff,
} from '#tests/support/bridge.ts'
import { type ProcessSite, startProcessSite } from '#tests/support/bridge-processes.ts'
import { until } from '#tests/support/processes.ts'

type Terminal = { anodeVolts: number; coilAmps: number; heaterVolts: number }
type Setpoints = { anodeVolts: number; on: Record<'heater' | 'anode' | 'coils', boolean> }

let site: ProcessSite
let page: Page

beforeAll(async () => {
  site = await startProcessSite([quickBench()])
}, 60_000)
afterAll(() => site.close())

beforeEach(async () => {
  await site.test.ask({ ask: 'power-cycle' })
  if (site.bridge.child.exitCode !== null || site.bridge.child.signalCode !== null) await site.startBridge()
  page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
})

const live = () => bringUpLive(site.address, page, people.technician)
const terminal = () => site.test.ask<Terminal>({ ask: 'terminal' })
const setpoints = () => site.test.ask<Setpoints>({ ask: 'setpoints' })

describe('A bridge that is killed', () => {
  it('leaves no voltage behind: the supply by itself takes the terminal below 5 V within 2 s', async () => {
    await live()
    await until('the anode is up', async () => (await terminal()).anodeVolts > 190)
    const killed = site.bridge.stop('SIGKILL')
    const start = performance.now()
    await until('the terminal falls', async () => (await terminal()).anodeVolts < 5, 5000)
    expect((performance.now() - start) / 1000).toBeLessThan(2)
    await killed
    expect((await setpoints()).on).toEqual({ heater: false, anode: false, coils: false })
    // The setpoint stays in the supply: the bridge that comes back must not find it switched on again.
    await site.startBridge()
    page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
    const state = await waitUntilOff(page)
    expect(state.anode).toMatchObject({ on: false, asked: 0, commanded: 0 })
    expect(state.controls).toBeNull()
    expect(await setpoints()).toMatchObject({
      anodeVolts: 0,
      on: { heater: false, anode: false, coils: false },
    })
    await page.close()
  })

  it('leaves the e-stop working: the interlock interrupts the supply with no bridge there', async () => {
    await live()
    const killed = site.bridge.stop('SIGKILL')
    await site.test.ask({ ask: 'e-stop', in: true })
    const start = performance.now()
    await until('the terminal falls', async () => (await terminal()).anodeVolts < 5, 2000)
    expect((performance.now() - start) / 1000).toBeLessThan(1)
    await killed
  })
})

describe('A bridge that is told to end', () => {
  it('makes safe first, and ends by itself', async () => {
    await live()
    const start = performance.now()
    const ended = site.bridge.stop('SIGTERM')
    await until('everything is off', async () => {
      const { on } = await setpoints()
      return !on.heater && !on.anode && !on.coils
    })
    expect((performance.now() - start) / 1000).toBeLessThan(1)
    await ended
    expect(site.bridge.child.exitCode).toBe(0)
    await until('the event is told after the next start', async () => {
      if (site.bridge.child.exitCode !== null) await site.startBridge()
      return [...site.receiver.events.values()].some(
        ({ kind, sentence }) => kind === 'make-safe' && sentence.startsWith('The bridge is being stopped.'),
      )
    })
  })
})

describe('The events of a bridge that is killed again and again', () => {
  it('reach the app each once: none that a page was shown is missing, none has two contents', async () => {
    const shown = new Map<number, string>()
    for (const milliseconds of [0, 40, 150]) {
      await waitUntilOff(page)
      await accept(site.address, people.technician, { kind: 'take-controls' })
      await accept(site.address, people.technician, { kind: 'release-controls' })
      await new Promise((resolve) => setTimeout(resolve, milliseconds))
      await site.bridge.stop('SIGKILL')
      for (const { sequence, sentence } of page.events()) shown.set(sequence, sentence)
      await site.startBridge()
      page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
    }
    await waitForState(page, ({ phase }) => phase === 'off')
    const { events, failures } = site.receiver
    await until('every event that was shown', () =>
      [...shown.keys()].every((sequence) => events.has(sequence)),
    )
    for (const [sequence, sentence] of shown) expect(events.get(sequence)?.sentence).toBe(sentence)
    expect(failures).toEqual([])
    const numbers = [...events.keys()].sort((a, b) => a - b)
    expect(numbers).toEqual(numbers.map((_, index) => index + 1))
    await page.close()
  }, 60_000)
})
