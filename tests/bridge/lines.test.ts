import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import type { Samples } from '#app/protocol/messages.ts'
import type { Channel } from '#app/safety/types.ts'
import {
  accept,
  type BridgeSite,
  bringToLive,
  openSocket,
  type Page,
  people,
  startBridgeSite,
  ticketOf,
  waitForState,
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

const line = (instrument: string, mode: string, more: Record<string, unknown> = {}) =>
  site.ask({ ask: 'line', instrument, mode, ...more })

/** Values of a channel that the page was told, from a message number on. */
function heard(channel: Channel, from: number): (number | null)[] {
  return page.messages
    .slice(from)
    .filter((message): message is Samples => message.type === 'samples')
    .flatMap((samples) => samples.values[channel] ?? [])
}

describe('A line that is lost', () => {
  it('makes the bench lost with its voltage unknown, leaves gaps and no held values, and is found again', async () => {
    await bringToLive(site, page, people.technician)
    line('supply', 'cut')
    const lost = await waitForState(page, ({ phase }) => phase === 'lost')
    expect(lost.ports.supply).toBe('lost')
    expect(lost.trip?.kind).toBe('lost-line')
    expect(lost.warnings.join()).toMatch(/treat the tube as live/)
    const from = page.messages.length
    await new Promise((resolve) => setTimeout(resolve, 700))
    const values = heard('anodeSupplyVolts', from)
    expect(values.length).toBeGreaterThan(3)
    expect(values.every((value) => value === null)).toBe(true)
    line('supply', 'good')
    const back = await waitForState(page, ({ phase }) => phase === 'tripped')
    expect(back.anode.on).toBe(false)
    await waitForState(page, ({ contacts }) =>
      contacts.some(({ name, closed }) => name === 'signal' && closed),
    )
    await waitForState(page, ({ anodeMeasured }) => anodeMeasured !== null && anodeMeasured.volts < 5)
    await accept(site.address, people.technician, { kind: 'reset-trip' })
    const { phase } = await waitForState(page, ({ trip }) => trip === null)
    expect(phase).toBe('off')
    const events = page.events().filter(({ kind }) => kind === 'line')
    expect(events.map(({ sentence }) => sentence).join(' ')).toMatch(/supply is lost.*The supply answers/)
  })

  it.each(['anode-meter', 'coil-meter', 'interlock'])(
    'of the %s takes the outputs down, and the bench comes back when it answers again',
    async (instrument) => {
      await bringToLive(site, page, people.technician)
      line(instrument, 'silent')
      const { trip } = await waitForState(page, (state) => state.trip !== null)
      expect(['stale-channel', 'lost-line']).toContain(trip?.kind)
      await until('the anode falls', () => site.terminal().anodeVolts < 5, 1500)
      await waitForState(page, ({ phase }) => phase === 'lost')
      line(instrument, 'good')
      await waitForState(page, ({ phase }) => phase === 'tripped')
    },
  )
})

describe('A line that carries badly', () => {
  it.each([
    ['fragment', {}],
    ['flood', {}],
    ['garble', { value: 0.01 }],
  ] as const)('(%s) gives right values or none, and no trip', async (mode, more) => {
    await bringToLive(site, page, people.technician)
    await waitForState(page, ({ channels }) => channels.anodeVolts?.state === 'settled')
    for (const instrument of ['supply', 'anode-meter', 'coil-meter', 'interlock'])
      line(instrument, mode, more)
    const from = page.messages.length
    await new Promise((resolve) => setTimeout(resolve, 3000))
    const values = heard('anodeVolts', from).filter((value) => value !== null)
    expect(values.length).toBeGreaterThan(5)
    for (const value of values) expect(Math.abs(value - 200)).toBeLessThan(2)
    expect(page.state()?.trip).toBeNull()
    expect(page.state()?.phase).toBe('live')
  })
})

describe('A bridge that starts', () => {
  it('on a supply that still holds its setpoints commands everything off first, and says so', async () => {
    await site.bridge.close()
    const { outputs } = site.simulator.bench('bench-1').model
    outputs.anode.volts = 250
    outputs.coils.amps = 1.5
    for (const output of Object.values(outputs)) output.isOn = true
    await until('the anode is up', () => site.terminal().anodeVolts > 240)
    await site.restart()
    await until('everything is off', () => !Object.values(outputs).some(({ isOn }) => isOn), 3000)
    await until('the anode falls', () => site.terminal().anodeVolts < 5, 1000)
    page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
    await waitUntilOff(page)
    expect(site.ask({ ask: 'setpoints' })).toMatchObject({ anodeVolts: 0, coilAmps: 0 })
    const starts = () => [...site.receiver.events.values()].filter(({ kind }) => kind === 'start')
    const event = await until('the event', () => starts().find(({ sentence }) => /still held/.test(sentence)))
    expect(event.sentence).toMatch(/^Every output was commanded off and read back as off\./)
  })

  it('applies the configuration of its spool while the app is gone', async () => {
    await page.close()
    await site.receiver.close()
    await site.restart()
    page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
    const { revision } = await waitUntilOff(page)
    expect(revision).toBe(1)
  })
})
