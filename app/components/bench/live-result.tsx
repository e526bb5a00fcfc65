import type { BenchView } from '#app/benches/bench-view.server.ts'
import type { BenchState } from '#app/protocol/messages.ts'

export function LiveResult({ view, state }: { view: BenchView; state: BenchState | null }) {
  return <p className="text-ink-soft">{view.readings.length === 0 && state ? 'e/m: no reading has edges yet.' : ''}</p>
}
