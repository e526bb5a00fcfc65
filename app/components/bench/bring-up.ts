import type { ReadingView } from '#app/benches/bench-view.server.ts'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import type { BenchState } from '#app/protocol/messages.ts'
import { edgeConvention } from './edge-words.ts'
import { isReadBy, readingToRead } from './logbook-rows.ts'

export const stepNames = [
  'Acknowledge the cautions',
  'Take the controls',
  'Switch the heater on',
  'Wait for the warm-up',
  'Set the anode voltage',
  'Set the coil current',
  'Wait until settled',
  'Capture',
  'Read the edges',
] as const

export type BringUpStep = { index: number; name: (typeof stepNames)[number]; why: string }

type Input = {
  state: BenchState
  cautionsAcknowledged: boolean
  personId: string
  readings: ReadingView[]
  /** What of the beam is read, and on what. */
  bench: Pick<BenchConfig, 'tube' | 'scale'>
}

/** The one thing to do next, in the order in which a tube is brought up, and why. Null while the bench is tripped or lost. */
export function nextStep({
  state,
  cautionsAcknowledged,
  personId,
  readings,
  bench,
}: Input): BringUpStep | null {
  if (state.phase === 'unconfigured' || state.phase === 'lost' || state.phase === 'tripped') return null
  const hasRungs = bench.scale.kind === 'rungs'
  const step = (index: number, why: string): BringUpStep => ({
    index,
    name: stepNames[index] ?? stepNames[0],
    why,
  })
  if (!cautionsAcknowledged)
    return step(0, 'The controls are for people who know what can hurt at this bench.')
  if (state.controls?.personId !== personId)
    return step(
      1,
      state.controls
        ? `${state.controls.name} has them. Ask for them, or read the edges of the beam that stands.`
        : 'One person at a time sets this bench, and everyone sees who.',
    )
  if (!state.heater.on) return step(2, 'A cold cathode gives no electrons, and is worn by a voltage.')
  if (state.warmUp.elapsedSeconds < state.warmUp.requiredSeconds)
    return step(3, 'The anode stays off until the heater has been in its band for this long.')
  if (!state.anode.on || state.anode.asked === 0)
    return step(4, 'The beam appears when the electrons have enough energy to make the gas glow.')
  if (!state.coils.on || state.coils.asked === 0)
    return step(
      5,
      hasRungs
        ? 'Raise it until the beam closes to a circle and meets a rung.'
        : 'Raise it until the beam closes to a circle inside the glass.',
    )
  const current = readingToRead(readings)
  if (current && isSameSetting(current, state) && !isReadBy(current, personId))
    return step(
      8,
      hasRungs
        ? `Reading ${current.number} has no rung. Choose the one that the beam meets: ${edgeConvention(bench)}.`
        : `Reading ${current.number} has no edges of yours. Read the ${edgeConvention(bench)}, left and right, off the scale while it stands.`,
    )
  const unsettled = (['anodeVolts', 'coilAmps'] as const).find(
    (channel) => state.channels[channel]?.state !== 'settled',
  )
  if (unsettled) {
    const which = unsettled === 'anodeVolts' ? 'anode voltage' : 'coil current'
    const status = state.channels[unsettled]
    return step(
      6,
      `The ${which} is ${status?.state ?? 'stale'}${status?.reason ? `: ${status.reason}` : ''}.`,
    )
  }
  return step(7, 'Both channels are settled. Capture, or set other values for the next reading.')
}

/** Whether a reading was captured at what is set now: only then can its edges still be read. */
function isSameSetting(reading: ReadingView, state: BenchState): boolean {
  return (
    Math.abs(reading.anodeVolts - state.anode.asked) < 3 &&
    Math.abs(Math.abs(reading.coilAmps) - state.coils.asked) < 0.02 &&
    reading.polarity === state.polarity
  )
}
