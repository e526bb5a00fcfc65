import { describe, expect, it } from 'vitest'
import { demoBenches } from '#app/db/demo-benches.ts'
import { type ChannelValues, channels, outputs } from '#app/safety/types.ts'
import type { OutputView } from '#app/safety/view.ts'
import { ChannelStatuses } from '#bridge/channel-statuses.ts'

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
