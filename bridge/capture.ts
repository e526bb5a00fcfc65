import { windowStatistics } from '#app/analysis/window-statistics.ts'
import type { Capture } from '#app/protocol/commands.ts'
import { isStaff } from '#app/safety/controls.ts'
import type { Machine } from '#app/safety/machine.ts'
import { type Actor, type Channel, channels, type Refusal } from '#app/safety/types.ts'
import { type ControlsHolder, channelWords } from '#app/safety/view.ts'
import { capital } from '#app/safety/words.ts'
import type { Apparatus } from './apparatus.ts'

/** The channels that a reading rests on. */
const decisive: readonly Channel[] = ['anodeVolts', 'coilAmps']

type CaptureRequest = {
  apparatus: Apparatus | null
  machine: Machine
  holder: ControlsHolder | null
  actor: Actor
  now: number
  wallOf: (at: number) => number
}

/** The window that ends with the newest sample, from the bridge's own ring buffer; or why it is not a reading. */
export function captureFrom(request: CaptureRequest): { capture: Capture } | { refusals: Refusal[] } {
  const { apparatus, machine, now } = request
  if (apparatus === null) {
    return { refusals: [{ code: 'not-configured', sentence: 'This bench is not commissioned.' }] }
  }
  const states = apparatus.statuses.all(now, apparatus.values, apparatus.outputs.views)
  const refusals = [...refusalsOfPerson(request), ...refusalsOfBench(machine, apparatus)]
  for (const channel of decisive) {
    const { state, reason } = states[channel]
    if (state === 'settled') continue
    refusals.push({
      code: 'not-settled',
      sentence: `${capital(channelWords[channel])} is ${state === 'off' ? 'off' : `${state} (${reason})`}: wait until it is settled.`,
    })
  }
  if (refusals.length > 0) return { refusals }

  const { config, ring } = apparatus
  const to = ring.next
  const from = ring.firstSince(ring.time(to - 1) - config.window.seconds)
  const { times, values } = ring.message(config.benchId, from, to)
  const statistics: Capture['statistics'] = {}
  for (const channel of channels) {
    const present = (values[channel] ?? []).filter((value) => value !== null)
    if (present.length >= 2) statistics[channel] = windowStatistics(present)
  }
  return {
    capture: {
      benchId: config.benchId,
      revision: config.revision,
      at: request.wallOf(ring.time(to - 1)),
      windowSeconds: config.window.seconds,
      polarity: apparatus.outputs.polarity,
      times,
      samples: values,
      statistics,
      states,
    },
  }
}

function refusalsOfPerson({ actor, holder }: CaptureRequest): Refusal[] {
  if (actor.role === 'guest') {
    return [{ code: 'not-permitted', sentence: 'A guest of a demonstration may watch only.' }]
  }
  if (isStaff(actor.role) || holder?.personId === actor.personId) return []
  return [
    {
      code: 'not-at-the-controls',
      sentence: `${holder === null ? 'Nobody' : holder.name} is at the controls: only whoever is there, or staff, captures.`,
    },
  ]
}

function refusalsOfBench({ phase, trip }: Machine, { outputs }: Apparatus): Refusal[] {
  if (phase === 'tripped') {
    return [{ code: 'tripped', sentence: `The bench has tripped: ${trip?.happened ?? ''}` }]
  }
  if (phase === 'lost') {
    return [{ code: 'line-lost', sentence: 'A line is lost: nothing can be captured before it is back.' }]
  }
  if (phase !== 'live') {
    return [{ code: 'not-permitted', sentence: 'The anode is off: a reading needs a beam.' }]
  }
  return outputs.polarityChanging
    ? [{ code: 'polarity-changing', sentence: 'The coil polarity is being changed: wait until it is done.' }]
    : []
}
