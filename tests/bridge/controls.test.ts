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
  startBridgeSite,
  ticketOf,
  waitForState,
  waitUntilOff,
} from '#tests/support/bridge.ts'
import { until } from '#tests/support/processes.ts'

let site: BridgeSite
let page: Page
/** What the dead-man counts input by: it runs with the real clock, and can be set ahead. */
let aheadSeconds: number

beforeEach(async () => {
  aheadSeconds = 0
  site = await startBridgeSite({
    benches: [quickBench({ deadManMinutes: 2 })],
    changes: { presenceClock: { now: () => performance.now() / 1000 + aheadSeconds } },
  })
  page = await openSocket(site.address, { ticket: ticketOf(people.student) })
  await waitUntilOff(page)
})
afterEach(async () => {
  await page.close()
  await site.close()
})

const code = async (...asked: Parameters<typeof command> extends [string, ...infer Rest] ? Rest : never) =>
  (await command(site.address, ...asked)).refusals[0]?.code

describe('The controls', () => {
  it('are taken when free, refused when taken, handed over, taken over by staff, released; all announced', async () => {
    const { student, otherStudent, instructor, technician } = people
    page.stay()
    expect(await code({ ...student, acknowledged: false }, { kind: 'take-controls' })).toBe(
      'not-acknowledged',
    )
    const taken = await accept(site.address, student, { kind: 'take-controls' })
    expect(taken.state.controls).toMatchObject({
      personId: student.personId,
      name: student.name,
      warned: false,
    })
    expect(await code(otherStudent, { kind: 'take-controls' })).toBe('controls-taken')
    expect(await code(technician, { kind: 'take-controls' })).toBe('controls-taken')
    expect(await code(otherStudent, { kind: 'take-over' })).toBe('not-permitted')
    expect(await code(otherStudent, { kind: 'release-controls' })).toBe('not-at-the-controls')
    const handOver = {
      kind: 'hand-over' as const,
      toPersonId: otherStudent.personId,
      toName: otherStudent.name,
      toRole: 'student' as const,
      toAcknowledged: true,
    }
    expect(await code(student, { ...handOver, toAcknowledged: false })).toBe('not-acknowledged')
    await accept(site.address, student, handOver)
    await waitForState(page, ({ controls }) => controls?.personId === otherStudent.personId)
    await accept(site.address, instructor, { kind: 'take-over' })
    await waitForState(page, ({ controls }) => controls?.personId === instructor.personId)
    await accept(site.address, instructor, { kind: 'release-controls' })
    await waitForState(page, ({ controls }) => controls === null)
    const events = await until('the events', () => {
      const told = page.events().filter(({ kind }) => kind === 'controls')
      return told.length === 4 ? told : null
    })
    expect(events.map(({ sentence }) => sentence)).toEqual([
      'Sanna Berg took the controls.',
      'Sanna Berg handed the controls to Otto Krall.',
      'Ines Rahm took the controls over from Otto Krall.',
      'Ines Rahm released the controls.',
    ])
  })

  it('released with an output on, make safe', async () => {
    await bringToLive(site, page, people.student)
    const { answer } = await accept(site.address, people.student, { kind: 'release-controls' })
    expect(answer).toMatch(/commanded off/)
    await until('the anode falls', () => site.terminal().anodeVolts < 5, 1000)
  })

  it('taken over keep the outputs as they are', async () => {
    await bringToLive(site, page, people.student)
    const other = await openSocket(site.address, { ticket: ticketOf(people.instructor) })
    other.stay()
    await until('the anode is up', () => site.terminal().anodeVolts > 190)
    await accept(site.address, people.instructor, { kind: 'take-over' })
    expect(site.terminal().anodeVolts).toBeGreaterThan(190)
    expect(await code(people.student, { kind: 'set-anode', volts: 100 })).toBe('not-at-the-controls')
    await other.close()
  })

  it('taken without a page are free again after five seconds, with no trip where nothing is on', async () => {
    await accept(site.address, people.otherStudent, { kind: 'take-controls' })
    await new Promise((resolve) => setTimeout(resolve, 4000))
    expect(page.state()?.controls).not.toBeNull()
    const state = await waitForState(page, ({ controls }) => controls === null, { limitMs: 3000 })
    expect(state.trip).toBeNull()
  })
})

describe('The dead-man', () => {
  it('warns a minute ahead, is put off by input, and then makes safe and frees the controls', async () => {
    await bringToLive(site, page, people.student)
    aheadSeconds = 65
    const warned = await waitForState(page, ({ controls }) => controls?.warned === true)
    expect((warned.controls?.presentUntil ?? 0) - Date.now() / 1000).toBeGreaterThan(45)
    expect((warned.controls?.presentUntil ?? 0) - Date.now() / 1000).toBeLessThan(60)
    await until('the warning', () => page.events().find(({ kind }) => kind === 'warning'))
    await page.close()
    page = await openSocket(site.address, { resume: page.hello.resumeKey })
    page.send({ type: 'present', version: 1, benchId: 'bench-1', input: true })
    await waitForState(page, ({ controls }) => controls?.warned === false)
    expect(page.state()?.phase).toBe('live')
    // Present without input: the socket alone does not hold the dead-man.
    const timer = setInterval(
      () => page.send({ type: 'present', version: 1, benchId: 'bench-1', input: false }),
      500,
    )
    aheadSeconds += 125
    const { trip, controls, heater } = await waitForState(page, (state) => state.trip !== null)
    clearInterval(timer)
    expect(trip?.kind).toBe('dead-man')
    expect(trip?.happened).toMatch(/gave no sign for 2 min/)
    expect([controls, heater.on]).toEqual([null, false])
    await until('the anode falls', () => site.terminal().anodeVolts < 5, 1000)
  })

  it('lets a page come back within five seconds', async () => {
    await bringToLive(site, page, people.student)
    const { resumeKey } = page.hello
    await page.close()
    await new Promise((resolve) => setTimeout(resolve, 3000))
    page = await openSocket(site.address, { resume: resumeKey })
    page.stay()
    await new Promise((resolve) => setTimeout(resolve, 3000))
    expect(page.state()?.phase).toBe('live')
    expect(site.terminal().anodeVolts).toBeGreaterThan(190)
  })
})
