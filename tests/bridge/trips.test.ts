import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import { detectionSeconds, fallSeconds, type TripKind } from '#app/safety/types.ts'
import {
  accept,
  type BridgeSite,
  bringToLive,
  bringToReady,
  command,
  openSocket,
  type Page,
  people,
  quickBench,
  startBridgeSite,
  ticketOf,
  waitForState,
} from '#tests/support/bridge.ts'
import { until } from '#tests/support/processes.ts'

let site: BridgeSite
let page: Page

beforeEach(async () => {
  site = await startBridgeSite({ benches: [quickBench({ coilCelsius: 45 })] })
  page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
})
afterEach(async () => {
  await page.close()
  await site.close()
})

type Fault = { kind: Exclude<TripKind, 'dead-man'>; ask: Record<string, unknown> }

const faults: Fault[] = [
  { kind: 'e-stop', ask: { ask: 'e-stop', in: true } },
  { kind: 'enclosure', ask: { ask: 'enclosure', open: true } },
  { kind: 'over-voltage', ask: { ask: 'fault', name: 'over-voltage', on: true, value: 1.6 } },
  { kind: 'over-current', ask: { ask: 'fault', name: 'over-current', on: true, value: 1.5 } },
  { kind: 'anode-current', ask: { ask: 'fault', name: 'anode-discharge', on: true, value: 0.015 } },
  { kind: 'read-back', ask: { ask: 'fault', name: 'read-back', on: true, value: 0.9 } },
  {
    kind: 'stale-channel',
    ask: { ask: 'line', instrument: 'anode-meter', mode: 'delay', milliseconds: 300 },
  },
  { kind: 'heater', ask: { ask: 'fault', name: 'heater-open', on: true } },
  { kind: 'coil-temperature', ask: { ask: 'fault', name: 'coil-hot', on: true, value: 70 } },
  { kind: 'lost-line', ask: { ask: 'line', instrument: 'supply', mode: 'cut' } },
]

/** Seconds from now until the simulator's own anode terminal is below 5 V. */
async function secondsToFall(): Promise<number> {
  const start = performance.now()
  await until('the anode terminal falls', () => site.terminal().anodeVolts < 5, 6000)
  return (performance.now() - start) / 1000
}

const tripped = (kind: TripKind) => waitForState(page, ({ trip }) => trip?.kind === kind)

describe('A trip', () => {
  it.each(faults)('by $kind takes the anode terminal below 5 V in its stated time', async ({ kind, ask }) => {
    await bringToLive(site, page, people.technician)
    await until('the anode is up', () => site.terminal().anodeVolts > 190)
    site.ask(ask)
    expect(await secondsToFall()).toBeLessThan(detectionSeconds[kind] + fallSeconds)
    const { trip, anode, coils } = await tripped(kind)
    expect(trip?.toDo).toMatch(/reset/)
    expect([anode.on, coils.on]).toEqual([false, false])
    await until('the event', () => page.events().find((event) => event.kind === 'trip'))
  })

  it('by heater sag out of its band trips, and a sag shorter than its detection does not', async () => {
    await bringToLive(site, page, people.technician)
    const { warmUp } = page.state() ?? {}
    site.ask({ ask: 'fault', name: 'heater-sag', on: true, value: 5 })
    await new Promise((resolve) => setTimeout(resolve, 500))
    site.ask({ ask: 'fault', name: 'heater-sag', on: false })
    await new Promise((resolve) => setTimeout(resolve, 1500))
    expect(page.state()?.phase).toBe('live')
    expect(page.state()?.warmUp).toEqual(warmUp)
    site.ask({ ask: 'fault', name: 'heater-sag', on: true, value: 5 })
    expect(await secondsToFall()).toBeLessThan(detectionSeconds.heater + fallSeconds)
    await tripped('heater')
  })

  it('by dead-man comes when the page of the person at the controls is gone for five seconds', async () => {
    await bringToLive(site, page, people.technician)
    const watcher = await openSocket(site.address, { ticket: ticketOf(people.student) })
    await page.close()
    const seconds = await secondsToFall()
    expect(seconds).toBeGreaterThan(4.5)
    expect(seconds).toBeLessThan(5 + 0.5 + fallSeconds)
    const { trip, controls, heater } = await waitForState(watcher, (state) => state.trip !== null)
    expect(trip?.kind).toBe('dead-man')
    expect(controls).toBeNull()
    expect(heater.on).toBe(false)
    await watcher.close()
  })

  it('is armed with the anode off: an open heater and coils that carry too much', async () => {
    await bringToReady(site, page, people.technician)
    site.ask({ ask: 'fault', name: 'heater-open', on: true })
    await tripped('heater')
    site.ask({ ask: 'fault', name: 'heater-open', on: false })
    await until(
      'the reset',
      async () => (await command(site.address, people.technician, { kind: 'reset-trip' })).accepted,
    )
    await accept(site.address, people.technician, { kind: 'set-coils', amps: 1 })
    await waitForState(page, ({ coils }) => coils.commanded === 1)
    site.ask({ ask: 'fault', name: 'over-current', on: true, value: 1.5 })
    await tripped('over-current')
    await until('the coils fall', () => Math.abs(site.terminal().coilAmps) < 0.05, 2000)
  })

  it('does not latch for an e-stop or an enclosure with everything off: the contact opens', async () => {
    await waitForState(page, ({ phase }) => phase === 'off')
    site.ask({ ask: 'e-stop', in: true })
    site.ask({ ask: 'enclosure', open: true })
    const state = await waitForState(page, ({ contacts }) =>
      ['e-stop', 'enclosure'].every((name) => contacts.some((it) => it.name === name && !it.closed)),
    )
    expect(state.phase).toBe('off')
    expect(state.trip).toBeNull()
    await until('the events', () => page.events().filter(({ kind }) => kind === 'interlock').length === 2)
  })

  it('is reset only when its fault is gone, and switches nothing on again', async () => {
    await bringToLive(site, page, people.technician)
    site.ask({ ask: 'enclosure', open: true })
    await tripped('enclosure')
    const early = await command(site.address, people.technician, { kind: 'reset-trip' })
    expect(early.refusals.map(({ code }) => code)).toEqual(['fault-present'])
    expect(early.refusals.map(({ sentence }) => sentence).join()).toMatch(
      /enclosure is still open|still measured/,
    )
    site.ask({ ask: 'enclosure', open: false })
    await waitForState(page, ({ anodeMeasured }) => (anodeMeasured?.volts ?? 99) < 5)
    await waitForState(page, ({ contacts }) =>
      contacts.some(({ name, closed }) => name === 'enclosure' && closed),
    )
    const reset = await accept(site.address, people.technician, { kind: 'reset-trip' })
    expect(reset.state.trip).toBeNull()
    expect(reset.state.anode).toMatchObject({ on: false, asked: 0, commanded: 0 })
    expect(site.ask({ ask: 'setpoints' })).toMatchObject({
      anodeVolts: 0,
      on: { anode: false, coils: false },
    })
  })

  it('is reset by role: over-voltage by a technician alone', async () => {
    await bringToLive(site, page, people.technician)
    site.ask({ ask: 'fault', name: 'over-voltage', on: true, value: 1.6 })
    await tripped('over-voltage')
    await waitForState(page, ({ anodeMeasured }) => (anodeMeasured?.volts ?? 99) < 5)
    for (const actor of [people.instructor, people.student, people.guest]) {
      const { accepted, refusals } = await command(site.address, actor, { kind: 'reset-trip' })
      expect(accepted).toBe(false)
      expect(refusals[0]?.code).toBe('not-permitted')
    }
    await accept(site.address, people.technician, { kind: 'reset-trip' })
  })
})
