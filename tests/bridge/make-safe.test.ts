import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import {
  accept,
  type BridgeSite,
  bringToLive,
  openSocket,
  type Page,
  people,
  quickBench,
  signedPost,
  startBridgeSite,
  ticketOf,
  waitForState,
} from '#tests/support/bridge.ts'
import { until } from '#tests/support/processes.ts'

let site: BridgeSite
let page: Page

beforeEach(async () => {
  site = await startBridgeSite({ benches: [quickBench(), quickBench({}, 'bench-2')] })
  page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
})
afterEach(async () => {
  await page.close()
  await site.close()
})

const isOff = { on: { heater: false, anode: false, coils: false } }

describe('Make safe', () => {
  it('from the socket of any watcher commands everything off within a second and says what was measured', async () => {
    await bringToLive(site, page, people.technician)
    const watcher = await openSocket(site.address, { ticket: ticketOf(people.student) })
    const start = performance.now()
    watcher.send({ type: 'make-safe', version: 1, benchId: 'bench-1' })
    await until('everything is off', () => {
      const { on } = site.ask({ ask: 'setpoints' }) as { on: Record<string, boolean> }
      return !on.heater && !on.anode && !on.coils
    })
    expect(performance.now() - start).toBeLessThan(1000)
    const { shutdown, phase } = await waitForState(page, (state) => state.shutdown !== null)
    expect(shutdown?.steps).toEqual([
      { output: 'anode', confirmed: true },
      { output: 'coils', confirmed: true },
      { output: 'heater', confirmed: true },
    ])
    expect(phase).toBe('off')
    const event = await until('the event', () => page.events().find(({ kind }) => kind === 'make-safe'))
    expect(event.sentence).toMatch(/off commanded, [\d.]+ V measured [\d.]+ s ago/)
    expect(event.sentence).not.toMatch(/\bis safe\b/)
    expect(event.personId).toBe(people.student.personId)
    await watcher.close()
  })

  it('by a signed request is accepted from whoever is not at the controls, also when tripped', async () => {
    await bringToLive(site, page, people.technician)
    site.ask({ ask: 'enclosure', open: true })
    await waitForState(page, ({ trip }) => trip !== null)
    const { answer } = await accept(site.address, people.otherStudent, { kind: 'make-safe' })
    expect(answer).toMatch(/^Anode, coils and heater commanded off\. Anode: off commanded/)
    expect(site.ask({ ask: 'setpoints' })).toMatchObject(isOff)
  })

  it('on a lost line is answered within a second, with every step named as not confirmed', async () => {
    await bringToLive(site, page, people.technician)
    for (const instrument of ['supply', 'anode-meter']) site.ask({ ask: 'line', instrument, mode: 'silent' })
    await new Promise((resolve) => setTimeout(resolve, 100))
    const start = performance.now()
    const { answer, state } = await accept(site.address, people.technician, { kind: 'make-safe' })
    expect(performance.now() - start).toBeLessThan(1000)
    expect(answer).toMatch(/Not confirmed: anode, coils and heater\./)
    expect(state.shutdown?.steps.every(({ confirmed }) => !confirmed)).toBe(true)
    const lost = await waitForState(
      page,
      ({ ports }) => ports.supply === 'lost' && ports['anode-meter'] === 'lost',
    )
    expect(lost.phase).toBe('lost')
    expect(lost.warnings.join()).toMatch(/voltage unknown: treat as live/)
    expect(lost.anodeMeasured).toBeNull()
    const second = await accept(site.address, people.technician, { kind: 'make-safe' })
    expect(second.answer).toMatch(/voltage unknown: treat as live/)
  })

  it('of the room is for staff, and reaches every bench', async () => {
    await bringToLive(site, page, people.technician)
    await bringToLive(site, page, people.technician, { benchId: 'bench-2' })
    const refused = await signedPost(site.address, '/make-safe', { actor: people.student })
    expect(refused.status).toBe(403)
    const student = await openSocket(site.address, { ticket: ticketOf(people.student) })
    student.send({ type: 'make-safe', version: 1, benchId: null })
    await until('the refusal', () => student.events().find(({ kind }) => kind === 'refusal'))
    await until('the anode is up', () => site.terminal().anodeVolts > 190)
    const { status, body } = await signedPost(site.address, '/make-safe', { actor: people.instructor })
    expect(status).toBe(200)
    expect(body).toMatchObject({ benches: [{ benchId: 'bench-1' }, { benchId: 'bench-2' }] })
    for (const bench of ['bench-1', 'bench-2']) {
      expect(site.ask({ ask: 'setpoints', bench })).toMatchObject(isOff)
    }
    await student.close()
  })

  it('comes first when the bridge is closed', async () => {
    await bringToLive(site, page, people.technician)
    const closing = site.bridge.close()
    await until('everything is off', () => {
      const { on } = site.ask({ ask: 'setpoints' }) as { on: Record<string, boolean> }
      return !on.heater && !on.anode && !on.coils
    })
    await closing
    await site.restart()
  })
})

describe('A ramp', () => {
  it('takes the anode up and down in small steps, and never a step into the tube', async () => {
    const { technician } = people
    await bringToLive(site, page, technician, { volts: 100, amps: 0.5 })
    const heights: number[] = []
    const timer = setInterval(() => heights.push(site.terminal().anodeVolts), 20)
    await accept(site.address, technician, { kind: 'set-anode', volts: 290 })
    await waitForState(page, ({ anode }) => anode.commanded === 290)
    await accept(site.address, technician, { kind: 'set-anode', volts: 0 })
    await waitForState(page, ({ anode, phase }) => !anode.on && phase === 'ready')
    clearInterval(timer)
    const rises = heights.slice(1).map((volts, i) => volts - (heights[i] ?? 0))
    // 400 V/s in steps of at most 0.2 s.
    expect(Math.max(...rises)).toBeLessThan(81)
    expect(Math.max(...heights)).toBeGreaterThan(285)
    expect(site.ask({ ask: 'setpoints' })).toMatchObject({ anodeVolts: 0, on: { anode: false } })
  })

  it('brings anode and coils to zero before the polarity relay moves, and back after it', async () => {
    const { technician } = people
    await bringToLive(site, page, technician, { benchId: 'bench-2' })
    const seen: { anodeVolts: number; coilAmps: number }[] = []
    const timer = setInterval(() => seen.push(site.terminal('bench-2')), 10)
    await accept(site.address, technician, { kind: 'set-polarity', polarity: -1 }, 'bench-2')
    const state = await waitForState(
      page,
      ({ polarity, polarityChanging, anode, coils }) =>
        polarity === -1 && !polarityChanging && anode.commanded === 200 && coils.commanded === 1,
      { benchId: 'bench-2' },
    )
    clearInterval(timer)
    expect(state.phase).toBe('live')
    await until('the current', () => site.terminal('bench-2').coilAmps < -0.95)
    const turn = seen.findIndex(({ coilAmps }) => coilAmps < -0.02)
    expect(turn).toBeGreaterThan(0)
    expect(seen[turn]?.anodeVolts).toBeLessThan(5)
    expect(Math.min(...seen.slice(0, turn).map(({ coilAmps }) => coilAmps))).toBeGreaterThan(-0.02)
  })
})
