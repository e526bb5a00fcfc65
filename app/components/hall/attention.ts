import type { BenchState } from '../../protocol/messages.ts'

export type Attention = 'trip' | 'caution' | 'none'

/** The line at the foot of a bench's tile, and how loudly it is said. */
export function benchSummary(state: BenchState | null): {
  attention: Attention
  words: string
  rank: number
} {
  if (!state) return { attention: 'caution', words: 'no word from the bridge: treat as live', rank: 1 }
  if (state.phase === 'tripped' && state.trip)
    return { attention: 'trip', words: state.trip.happened, rank: 0 }
  if (state.phase === 'lost')
    return { attention: 'caution', words: 'line lost, voltage unknown: treat as live', rank: 1 }
  const warning = state.warnings[0]
  if (warning) return { attention: 'caution', words: warning, rank: 2 }
  return { attention: 'none', words: quietWords(state), rank: 3 }
}

function quietWords({ phase, warmUp, channels }: BenchState): string {
  if (phase === 'unconfigured') return 'not commissioned'
  if (phase === 'off') return 'off'
  if (phase === 'warming')
    return `warming ${Math.floor(warmUp.elapsedSeconds)} of ${Math.round(warmUp.requiredSeconds)} s`
  if (phase === 'ready') return 'warm, anode off'
  const states = [channels.anodeVolts?.state, channels.coilAmps?.state]
  const word = ['stale', 'noisy', 'drifting', 'settling'].find((it) => states.some((state) => state === it))
  return word ?? 'settled'
}

/** Whether there is anything to make safe: an output that is on, or a bench of which nobody can tell. */
export function mayBeOn(state: BenchState | null): boolean {
  if (!state || state.phase === 'lost' || state.phase === 'tripped') return true
  return state.heater.on || state.anode.on || state.coils.on
}

/** Benches by need of attention, then by name: 'Bench 2' before 'Bench 10'. */
export function byAttention<T extends { name: string; state: BenchState | null }>(benches: T[]): T[] {
  return [...benches].sort(
    (a, b) =>
      benchSummary(a.state).rank - benchSummary(b.state).rank ||
      a.name.localeCompare(b.name, 'en', { numeric: true }),
  )
}

/**
 * '8 benches, 4 live, 1 tripped, 1 lost': what a glance at the room has to tell.
 * @param unwatched benches without ports, of which nobody is told anything
 */
export function roomWords(states: (BenchState | null)[], unwatched = 0): string {
  const count = (phase: BenchState['phase']) => states.filter((state) => state?.phase === phase).length
  const parts = (['live', 'tripped', 'lost'] as const)
    .map((phase) => [count(phase), phase] as const)
    .filter(([number]) => number > 0)
    .map(([number, phase]) => `${number} ${phase}`)
  if (unwatched > 0) parts.push(`${unwatched} not watched`)
  const all = states.length + unwatched
  return [`${all} ${all === 1 ? 'bench' : 'benches'}`, ...parts].join(', ')
}
