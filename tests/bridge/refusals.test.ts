import { afterEach, beforeEach, describe, expect, it } from 'vitest'
import type { Command } from '#app/protocol/commands.ts'
import type { Actor, RefusalCode } from '#app/safety/types.ts'
import {
  accept,
  type BridgeSite,
  bringToReady,
  command,
  openSocket,
  type Page,
  people,
  quickBench,
  sign,
  signedPost,
  signedRequest,
  startBridgeSite,
  ticketOf,
  waitForState,
  waitUntilOff,
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

async function refused(actor: Actor, asked: Command, code: RefusalCode, words: RegExp, benchId = 'bench-1') {
  const { accepted, refusals } = await command(site.address, actor, asked, benchId)
  expect(accepted).toBe(false)
  const refusal = refusals.find((one) => one.code === code)
  expect(refusal, JSON.stringify(refusals)).toBeDefined()
  expect(refusal?.sentence).toMatch(words)
}

describe('A setpoint is refused', () => {
  it('by each limit, named, with whose it is and by how much; and each refusal is an event', async () => {
    const { student } = people
    await bringToReady(site, page, student)
    await refused(
      student,
      { kind: 'set-anode', volts: 320 },
      'above-limit',
      /20 V above this bench's limit of 300 V/,
    )
    await refused(
      student,
      { kind: 'set-anode', volts: 400 },
      'above-range',
      /50 V above the supply's range of 350 V/,
    )
    await refused(student, { kind: 'set-anode', volts: -5 }, 'below-zero', /below zero by 5 V/)
    await refused(student, { kind: 'set-anode', volts: Number.NaN }, 'not-a-number', /must be a number/)
    await refused(student, { kind: 'set-anode', volts: Number.POSITIVE_INFINITY }, 'not-a-number', /number/)
    await refused(
      student,
      { kind: 'set-coils', amps: 2.5 },
      'above-limit',
      /0.5 A above this bench's limit of 2 A/,
    )
    await refused(
      student,
      { kind: 'set-coils', amps: 4 },
      'above-range',
      /0.5 A above the supply's range of 3.5 A/,
    )
    await refused(student, { kind: 'set-coils', amps: -1 }, 'below-zero', /below zero by 1 A/)
    await refused(student, { kind: 'set-polarity', polarity: -1 }, 'polarity-fixed', /commissioned/)
    await until('the events', () => page.events().filter(({ kind }) => kind === 'refusal').length === 9)
    expect(site.terminal().anodeVolts).toBeLessThan(1)
    expect(site.ask({ ask: 'setpoints' })).toMatchObject({ on: { anode: false, coils: false } })
  })

  it('to whoever is not at the controls, has not acknowledged the cautions, or is a guest', async () => {
    await waitUntilOff(page)
    const { student, otherStudent, guest, technician } = people
    await refused(student, { kind: 'set-coils', amps: 1 }, 'not-at-the-controls', /take the controls/)
    await accept(site.address, student, { kind: 'take-controls' })
    await refused(
      otherStudent,
      { kind: 'set-coils', amps: 1 },
      'not-at-the-controls',
      /Sanna Berg is at the controls/,
    )
    await refused(
      technician,
      { kind: 'set-coils', amps: 1 },
      'not-at-the-controls',
      /Sanna Berg is at the controls/,
    )
    await refused(
      { ...student, acknowledged: false },
      { kind: 'set-coils', amps: 1 },
      'not-acknowledged',
      /cautions/,
    )
    await refused(guest, { kind: 'set-anode', volts: 100 }, 'not-permitted', /guest/)
  })

  it('while the heater is off or not warmed up, the enclosure open, the e-stop in', async () => {
    const { technician } = people
    await waitUntilOff(page)
    await accept(site.address, technician, { kind: 'take-controls' })
    page.stay()
    await refused(technician, { kind: 'set-anode', volts: 100 }, 'heater-off', /heater is off/)
    await accept(site.address, technician, { kind: 'switch-heater', on: true })
    await refused(technician, { kind: 'set-anode', volts: 100 }, 'not-warmed-up', /wait \d+ s/)
    await waitForState(page, ({ phase }) => phase === 'ready')
    site.ask({ ask: 'enclosure', open: true })
    await waitForState(page, ({ contacts }) =>
      contacts.some(({ name, closed }) => name === 'enclosure' && !closed),
    )
    await refused(technician, { kind: 'set-anode', volts: 100 }, 'enclosure-open', /close it/)
    await refused(technician, { kind: 'set-coils', amps: 1 }, 'enclosure-open', /close it/)
    site.ask({ ask: 'enclosure', open: false })
    site.ask({ ask: 'e-stop', in: true })
    await waitForState(page, ({ trip }) => trip?.kind === 'e-stop')
    await refused(technician, { kind: 'set-anode', volts: 100 }, 'e-stop-in', /pull it out/)
    await refused(technician, { kind: 'set-anode', volts: 100 }, 'tripped', /Tripped/)
    await refused(technician, { kind: 'set-coils', amps: 1 }, 'e-stop-in', /pull it out/)
  })

  it('while the line is lost, and on a bench that is no longer configured', async () => {
    const { technician } = people
    await waitUntilOff(page)
    await accept(site.address, technician, { kind: 'take-controls' })
    page.stay()
    site.ask({ ask: 'line', instrument: 'supply', mode: 'cut' })
    await waitForState(page, ({ phase }) => phase === 'lost')
    await refused(technician, { kind: 'set-coils', amps: 1 }, 'line-lost', /supply is lost/)
    await refused(technician, { kind: 'set-anode', volts: 100 }, 'line-lost', /supply is lost/)
    await signedRequest(site.address, 'PUT', '/configuration', { benches: [quickBench()] })
    await waitForState(page, ({ phase }) => phase === 'unconfigured', { benchId: 'bench-2' })
    await refused(technician, { kind: 'set-anode', volts: 100 }, 'not-configured', /commission/, 'bench-2')
  })
})

describe('A changed configuration', () => {
  it('waits until every output is off', async () => {
    await bringToReady(site, page, people.technician)
    const changed = { ...quickBench({ anodeVolts: 250 }), revision: 2 }
    await signedRequest(site.address, 'PUT', '/configuration', {
      benches: [changed, quickBench({}, 'bench-2')],
    })
    const waiting = await waitForState(page, ({ warnings }) =>
      warnings.some((words) => /waits until/.test(words)),
    )
    expect(waiting.revision).toBe(1)
    await accept(site.address, people.technician, { kind: 'switch-heater', on: false })
    const state = await waitForState(page, ({ revision, phase }) => revision === 2 && phase === 'off')
    expect(state.anode.limit).toBe(250)
  })
})

describe('A request', () => {
  const path = '/benches/bench-1/commands'
  const body = JSON.stringify({ actor: people.technician, command: { kind: 'take-controls' } })
  const post = async (headers: Record<string, string>) =>
    (await fetch(`${site.address}${path}`, { method: 'POST', body, headers })).status

  it('is refused without a signature, with a wrong or an old one, and the second time', async () => {
    expect(await post({})).toBe(401)
    expect(await post(sign('POST', path, body, { secret: 'another-secret-altogether' }))).toBe(401)
    expect(await post(sign('POST', path, `${body} `))).toBe(401)
    expect(await post(sign('POST', '/make-safe', body))).toBe(401)
    expect(await post(sign('POST', path, body, { time: Date.now() / 1000 - 61 }))).toBe(401)
    const headers = sign('POST', path, body)
    expect(await post(headers)).toBe(200)
    expect(await post(headers)).toBe(401)
  })

  it('signed before a restart is refused after it', async () => {
    const headers = sign('POST', path, body)
    await site.restart()
    expect(await post(headers)).toBe(401)
    page = await openSocket(site.address, { ticket: ticketOf(people.technician) })
  })

  it('that cannot be read is 400, of an unknown bench 404, and health needs no signature', async () => {
    const wrong = { actor: people.technician, command: { kind: 'open-the-window' } }
    expect((await signedPost(site.address, path, wrong)).status).toBe(400)
    const take = { actor: people.technician, command: { kind: 'take-controls' } }
    expect((await signedPost(site.address, '/benches/bench-9/commands', take)).status).toBe(404)
    const health = await fetch(`${site.address}/health`)
    expect(health.status).toBe(200)
    expect(await health.json()).toMatchObject({ status: 'up', bridgeId: 'room-1' })
  })
})
