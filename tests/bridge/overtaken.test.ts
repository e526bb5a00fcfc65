import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import {
  accept,
  type BridgeSite,
  bringToLive,
  command,
  openSocket,
  type Page,
  people,
  quickBench,
  signedRequest,
  startBridgeSite,
  ticketOf,
  waitForState,
  waitUntilOff,
} from '#tests/support/bridge.ts'
import { until } from '#tests/support/processes.ts'

let site: BridgeSite
let page: Page
let aheadSeconds: number

beforeEach(async () => {
  aheadSeconds = 0
  site = await startBridgeSite({
    benches: [quickBench({ deadManMinutes: 2 })],
    changes: { presenceClock: { now: () => performance.now() / 1000 + aheadSeconds } },
  })
  page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
  await waitUntilOff(page)
  await accept(site.address, people.technician, { kind: 'take-controls' })
  page.stay()
})
afterEach(async () => {
  await page.close()
  await site.close()
})

const { technician } = people
const slowSupply = (milliseconds: number) =>
  site.ask({ ask: 'line', instrument: 'supply', mode: 'delay', milliseconds })
const isOn = () => (site.ask({ ask: 'setpoints' }) as { on: Record<string, boolean> }).on
const codesOf = (reply: Awaited<ReturnType<typeof command>>) => reply.refusals.map(({ code }) => code)
const pause = (seconds: number) => new Promise((resolve) => setTimeout(resolve, seconds * 1000))

describe('What was asked before the outputs were taken down', () => {
  it('is not carried out after it, though it waited in the queue', async () => {
    slowSupply(150)
    const heater = command(site.address, technician, { kind: 'switch-heater', on: true })
    await pause(0.3)
    const coils = command(site.address, technician, { kind: 'set-coils', amps: 1 })
    await pause(0.3)
    page.send({ type: 'make-safe', version: 1, benchId: 'bench-1' })
    expect(codesOf(await heater)).toEqual(['busy'])
    expect(codesOf(await coils)).toContain('busy')
    await pause(0.5)
    expect(isOn()).toEqual({ heater: false, anode: false, coils: false })
  })

  it('is not carried out when the person who asked is gone meanwhile', async () => {
    slowSupply(150)
    const heater = command(site.address, technician, { kind: 'switch-heater', on: true })
    await pause(0.3)
    aheadSeconds += 125
    expect(codesOf(await heater)).toEqual(['busy'])
    expect(page.state()?.controls).toBeNull()
    await pause(0.5)
    expect(isOn().heater).toBe(false)
  })
})

describe('A bridge that is being stopped', () => {
  it('switches nothing on any more', async () => {
    slowSupply(80)
    const closing = site.bridge.close()
    const reply = await command(site.address, technician, { kind: 'switch-heater', on: true })
    expect(codesOf(reply)).toEqual(['busy'])
    await closing
    site.ask({ ask: 'line', instrument: 'supply', mode: 'good' })
    await site.restart()
  })
})

describe('Make safe', () => {
  it('on a bench whose supply is not known here does not say that anything was commanded', async () => {
    await accept(site.address, technician, { kind: 'release-controls' })
    await signedRequest(site.address, 'PUT', '/configuration', { benches: [] })
    await waitForState(page, ({ phase }) => phase === 'unconfigured')
    const { answer } = await accept(site.address, technician, { kind: 'make-safe' })
    expect(answer).toMatch(/^Nothing could be commanded.*voltage unknown: treat as live/)
  })
})

describe('The anode voltage as measured', () => {
  it('is the higher one of two instruments that disagree', async () => {
    await bringToLive(site, page, technician)
    await until('the anode is up', () => (page.state()?.anodeMeasured?.volts ?? 0) > 190)
    const from = page.messages.length
    site.ask({ ask: 'fault', name: 'read-back', on: true, value: 0.05 })
    await waitForState(page, ({ trip }) => trip?.kind === 'read-back')
    const measured = page.messages
      .slice(from)
      .flatMap((said) => (said.type === 'state' && said.state.anode.on ? [said.state.anodeMeasured] : []))
    expect(measured.length).toBeGreaterThan(0)
    for (const one of measured) expect(one?.volts).toBeGreaterThan(150)
  })
})

describe('A supply that was found again while it was being prepared', () => {
  it('is prepared once, by the line that is open now', async () => {
    const starts = () => page.events().filter(({ kind }) => kind === 'start').length
    const before = starts()
    site.ask({ ask: 'line', instrument: 'supply', mode: 'cut' })
    await waitForState(page, ({ ports }) => ports.supply === 'lost')
    slowSupply(120)
    await waitForState(page, ({ ports }) => ports.supply === 'open')
    site.ask({ ask: 'line', instrument: 'supply', mode: 'cut' })
    await waitForState(page, ({ ports }) => ports.supply === 'lost')
    site.ask({ ask: 'line', instrument: 'supply', mode: 'good' })
    await until('the start', () => starts() > before)
    await pause(1)
    expect(starts()).toBe(before + 1)
  })
})
