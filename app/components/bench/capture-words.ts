import type { BenchState } from '#app/protocol/messages.ts'

const needed = [
  ['anodeVolts', 'anode voltage'],
  ['coilAmps', 'coil current'],
] as const

/** Why a reading cannot be captured now, in one sentence; null when it can. The bridge has the last word. */
export function captureWaitsFor(state: BenchState | null, isLinked: boolean): string | null {
  if (!isLinked || !state) return 'Capture waits for the link to the bridge.'
  if (state.phase === 'tripped') return 'Capture waits for the trip to be reset.'
  if (state.phase !== 'live') return 'Capture waits for the anode to be on.'
  for (const [channel, word] of needed) {
    const status = state.channels[channel]
    if (status?.state !== 'settled')
      return `Capture waits for the ${word}: ${status?.state ?? 'stale'}${status?.reason ? `, ${status.reason}` : ''}.`
  }
  return null
}
