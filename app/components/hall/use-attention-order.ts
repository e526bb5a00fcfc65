import { useCallback, useSyncExternalStore } from 'react'
import type { TelemetryStore } from '../../telemetry/store.ts'
import { byAttention } from './attention.ts'

/** The benches by need of attention. Renders anew only when the order changes, not with every state. */
export function useAttentionOrder<T extends { id: string; name: string }>(
  store: TelemetryStore,
  benches: T[],
): T[] {
  const subscribe = useCallback(
    (listener: () => void) => {
      const stops = benches.map(({ id }) => store.subscribe(`state:${id}`, listener))
      return () => {
        for (const stop of stops) stop()
      }
    },
    [store, benches],
  )
  const order = useSyncExternalStore(
    subscribe,
    () =>
      byAttention(benches.map((bench) => ({ ...bench, state: store.state(bench.id) })))
        .map(({ id }) => id)
        .join('\n'),
    () => benches.map(({ id }) => id).join('\n'),
  )
  return order.split('\n').flatMap((id) => benches.find((bench) => bench.id === id) ?? [])
}
