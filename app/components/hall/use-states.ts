import { useCallback, useSyncExternalStore } from 'react'
import type { BenchState } from '../../protocol/messages.ts'
import type { TelemetryStore } from '../../telemetry/store.ts'
import { byAttention } from './attention.ts'

/** One word of all benches' states at once; renders anew only when `read` answers something else. */
export function useStates<T extends string>(
  store: TelemetryStore,
  benches: { id: string }[],
  read: (states: (BenchState | null)[]) => T,
  onServer: T,
): T {
  const subscribe = useCallback(
    (listener: () => void) => {
      const stops = benches.map(({ id }) => store.subscribe(`state:${id}`, listener))
      return () => {
        for (const stop of stops) stop()
      }
    },
    [store, benches],
  )
  return useSyncExternalStore(
    subscribe,
    () => read(benches.map(({ id }) => store.state(id))),
    () => onServer,
  )
}

/** The benches by need of attention. Renders anew only when the order changes, not with every state. */
export function useAttentionOrder<T extends { id: string; name: string }>(
  store: TelemetryStore,
  benches: T[],
): T[] {
  const ids = benches.map(({ id }) => id).join('\n')
  const order = useStates(
    store,
    benches,
    (states) =>
      byAttention(benches.map((bench, index) => ({ ...bench, state: states[index] ?? null })))
        .map(({ id }) => id)
        .join('\n'),
    ids,
  )
  return order.split('\n').flatMap((id) => benches.find((bench) => bench.id === id) ?? [])
}
