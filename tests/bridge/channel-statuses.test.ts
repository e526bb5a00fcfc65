import { describe, expect, it } from 'vitest'
import { demoBenches } from '#app/db/demo-benches.ts'
import { type ChannelValues, channels, outputs } from '#app/safety/types.ts'
import type { OutputView } from '#app/safety/view.ts'
import { ChannelStatuses } from '#bridge/channel-statuses.ts'
import { differenceInWords } from '#bridge/channel-words.ts'

const [config] = demoBenches
if (!config) throw new Error('The demo has no bench')

const on: OutputView = { on: true, asked: 0, commanded: 0, changedAt: 0 }
const views = (changedAt: number) =>
  Object.fromEntries(outputs.map((output) => [output, { ...on, changedAt }])) as Record<
    (typeof outputs)[number],
    OutputView
  >
const steady = Object.fromEntries(channels.map((channel) => [channel, 1])) as ChannelValues

/** Ten steady samples a second. */
function feed(statuses: ChannelStatuses, from: number, seconds: number, changedAt: number) {
  for (let step = 1; step <= seconds * 10; step++) statuses.add(from + step / 10, steady, views(changedAt))
  return from + seconds
}

describe('The state of a channel', () => {
  it('is settled once its window has been steady for the hold time', () => {
    const statuses = new ChannelStatuses(config)
    const now = feed(statuses, 0, config.window.seconds + config.window.holdSeconds + 1, 0)
    expect(statuses.status('anodeVolts', now, steady, views(0)).state).toBe('settled')
  })

  it('is settling again in the very moment in which its setpoint changes', () => {
    const statuses = new ChannelStatuses(config)
    const now = feed(statuses, 0, 8, 0)
    expect(statuses.status('coilAmps', now, steady, views(now)).state).toBe('settling')
    const later = feed(statuses, now, config.window.seconds - 1, now)
    expect(statuses.status('coilAmps', later, steady, views(now)).state).toBe('settling')
    const settled = feed(statuses, later, 3, now)
    expect(statuses.status('coilAmps', settled, steady, views(now)).state).toBe('settled')
  })

  it('does not heed a change of an output that it does not follow', () => {
    const statuses = new ChannelStatuses(config)
    const now = feed(statuses, 0, 8, 0)
    const changed = { ...views(0), heater: { ...on, changedAt: now } }
    expect(statuses.status('coilAmps', now, steady, changed).state).toBe('settled')
    expect(statuses.status('heaterVolts', now, steady, changed).state).toBe('settling')
  })
})

describe('Why a channel is in its state', () => {
  it('is told with the unit of the channel', () => {
    const statuses = new ChannelStatuses(config)
    const { seconds: windowSeconds, holdSeconds: hold } = config.window
    let at = 0
    const add = (seconds: number, volts: (t: number) => number) => {
      for (let step = 1; step <= seconds * 10; step++) {
        at += 0.1
        statuses.add(at, { ...steady, anodeVolts: volts(at) }, views(0))
      }
      return statuses.status('anodeVolts', at, { ...steady, anodeVolts: 200 }, views(0)).reason
    }
    const noise = (t: number) => 200 + (Math.round(t * 10) % 2 ? 0.06 : -0.06)
    expect(add(windowSeconds - 1.5, noise)).toMatch(/^watched for \d of \d s$/)
    expect(add(1.6 + hold / 2, noise)).toMatch(/^steady for \d of \d s$/)
    expect(add(hold, noise)).toBe(`± 0.06 V over ${windowSeconds} s`)
    expect(add(windowSeconds + 1, (t) => 200 + 5 * t)).toBe('rises 300 V per minute')
    expect(add(windowSeconds + 1, (t) => 200 + (Math.round(t * 10) % 2 ? 42 : -42))).toMatch(
      /^standard deviation 4\d V, [\d.]+ m?V allowed$/,
    )
  })

  it.each([
    ['coilAmps', 0.0004, '0.40 mA'],
    ['coilAmps', 0.012, '12 mA'],
    ['anodeAmps', 3e-6, '3.0 µA'],
    ['coilCelsius', 0.4, '0.40 °C'],
    ['anodeVolts', 0, '0 V'],
    ['anodeVolts', 12.34, '12 V'],
  ] as const)('with two digits that a reader can use: %s %s is %s', (channel, difference, words) => {
    expect(differenceInWords(channel, difference)).toBe(words)
  })
})
