import type { BenchState } from '#app/protocol/messages.ts'
import type { Role } from '#app/safety/types.ts'

const needed = [
  ['anodeVolts', 'anode voltage'],
  ['coilAmps', 'coil current'],
] as const

/** Why a reading cannot be captured now, in one sentence; null when it can. The bridge has the last word. */
export function captureWaitsFor(
  state: BenchState | null,
  { isLinked, person }: { isLinked: boolean; person: { id: string; role: Role } },
): string | null {
  if (!isLinked || !state) return 'Capture waits for the link to the bridge.'
  const isStaff = person.role === 'technician' || person.role === 'instructor'
  if (!isStaff && state.controls?.personId !== person.id)
    return 'Capture is for the person at the controls. You can read the edges of each reading all the same.'
  if (state.phase === 'tripped') return 'Capture waits for the trip to be reset.'
  if (state.phase !== 'live') return 'Capture waits for the anode to be on.'
  for (const [channel, word] of needed) {
    const status = state.channels[channel]
    if (status?.state !== 'settled')
      return `Capture waits for the ${word}: ${status?.state ?? 'stale'}${status?.reason ? `, ${status.reason}` : ''}.`
  }
  return null
}
