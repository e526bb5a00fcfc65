import type { BenchEvent, BenchState, Picture, Samples } from '#app/protocol/messages.ts'

/** What the bridge tells whoever listens. A room-wide event names no bench. */
export type BusMessage =
  | Samples
  | Picture
  | { type: 'state'; state: BenchState }
  | { type: 'event'; event: BenchEvent }

export type Bus = {
  publish(message: BusMessage): void
  /** Returns what ends the subscription. */
  subscribe(listener: (message: BusMessage) => void): () => void
}

/** The bus in this process. A broker for several rooms would stand behind the same two functions. */
export function createBus(): Bus {
  const listeners = new Set<(message: BusMessage) => void>()
  return {
    publish(message) {
      for (const listener of listeners) listener(message)
    },
    subscribe(listener) {
      listeners.add(listener)
      return () => listeners.delete(listener)
    },
  }
}

export const benchIdOf = (message: BusMessage): string | null =>
  message.type === 'state'
    ? message.state.benchId
    : message.type === 'event'
      ? message.event.benchId
      : message.benchId
