import {
  createContext,
  use,
  useCallback,
  useEffect,
  useMemo,
  useRef,
  useState,
  useSyncExternalStore,
} from 'react'
import type { BenchEvent } from '#app/protocol/messages.ts'
import type { Channel } from '#app/safety/types.ts'
import { openConnection } from './connection.ts'
import { requestMakeSafe } from './make-safe.ts'
import { TelemetryStore } from './store.ts'

type Value = {
  store: TelemetryStore
  makeSafe: (benchId: string | null) => void
  showPresence: () => void
}
const TelemetryContext = createContext<Value | null>(null)

type Props = {
  socketUrl: string
  /** The bench of this page, for its ticket and for presence; none on a page that watches the room. */
  benchId?: string
  children: React.ReactNode
}

/** Opens this page's link to the bridge and hands what it hears to the hooks below. One a page. */
export function Telemetry({ socketUrl, benchId, children }: Props) {
  const [store] = useState(() => new TelemetryStore())
  const connection = useRef<ReturnType<typeof openConnection> | null>(null)

  useEffect(() => {
    const opened = openConnection({ store, socketUrl, benchId: benchId ?? null })
    connection.current = opened
    return () => {
      connection.current = null
      opened.close()
    }
  }, [store, socketUrl, benchId])

  const value = useMemo<Value>(
    () => ({
      store,
      makeSafe: (target) => {
        const { answered, stop } = nextMakeSafe(store, target)
        const send = (message: object) => connection.current?.send(message) ?? false
        void requestMakeSafe({ store, send, benchId: target, answered }).finally(stop)
      },
      showPresence: () => connection.current?.showPresence(),
    }),
    [store],
  )
  return (
    <TelemetryContext value={value}>
      {children}
      <MakeSafeAnnouncement />
    </TelemetryContext>
  )
}

/** Waits for the bridge's word on a make safe that is newer than all it has reported before. */
function nextMakeSafe(store: TelemetryStore, benchId: string | null) {
  const asked = store.bridgeSeconds() - 0.5
  let stop = () => {}
  const answered = new Promise<string>((resolve) => {
    stop = store.subscribe('event', () => {
      const event = store.lastEvent()
      if (event && isAnswer(event, benchId) && event.at >= asked) resolve(event.sentence)
    })
  })
  return { answered, stop: () => stop() }
}

function isAnswer(event: BenchEvent, benchId: string | null): boolean {
  return (
    event.kind === 'make-safe' && (benchId === null || event.benchId === null || event.benchId === benchId)
  )
}

function MakeSafeAnnouncement() {
  const report = useMakeSafeReport()
  return (
    <p role="alert" aria-atomic="true" className="sr-only">
      {report?.sentence}
    </p>
  )
}

function useTelemetry(): Value {
  const value = use(TelemetryContext)
  if (!value) throw new Error('This hook needs <Telemetry> above it.')
  return value
}

function useTopic<T>(topic: string, read: () => T, onServer: T): T {
  const { store } = useTelemetry()
  const subscribe = useCallback((listener: () => void) => store.subscribe(topic, listener), [store, topic])
  return useSyncExternalStore(subscribe, read, () => onServer)
}

const connecting = { kind: 'connecting' } as const
const noEvents: BenchEvent[] = []

export const useTelemetryStore = () => useTelemetry().store

/** Connected, reconnecting since when, or refused with the reason in a sentence. */
export const useLink = () => useTopic('link', useTelemetry().store.link, connecting)

/** Samples that this page lost because it could not keep up. */
export const useDroppedSamples = () => useTopic('link', useTelemetry().store.droppedSamples, 0)

export function useBenchState(benchId: string) {
  const { store } = useTelemetry()
  return useTopic(`state:${benchId}`, () => store.state(benchId), null)
}

export function usePicture(benchId: string) {
  const { store } = useTelemetry()
  return useTopic(`picture:${benchId}`, () => store.picture(benchId), null)
}

/** The last events of a bench that this page has heard, the newest first. */
export function useEvents(benchId: string) {
  const { store } = useTelemetry()
  return useTopic(`events:${benchId}`, () => store.events(benchId), noEvents)
}

/** The newest sample of a channel, at most four times a second. Its value is null where nothing was read. */
export function useLatest(benchId: string, channel: Channel) {
  const { store } = useTelemetry()
  return useTopic(`figures:${benchId}`, () => store.latest(benchId, channel), null)
}

/** The function that makes a bench safe, or with null the whole room. */
export const useMakeSafe = () => useTelemetry().makeSafe

export const useMakeSafeReport = () => useTopic('safe', useTelemetry().store.report, null)

/** A press of 'I am here', for the person at the controls. */
export const useShowPresence = () => useTelemetry().showPresence

/** The bridge's time in seconds since 1970, anew every second. Null on the server, which knows no bridge's clock. */
export function useBridgeSeconds(): number | null {
  const { store } = useTelemetry()
  const [seconds, setSeconds] = useState<number | null>(null)
  useEffect(() => {
    const tick = () => setSeconds(store.bridgeSeconds())
    tick()
    const timer = setInterval(tick, 1000)
    return () => clearInterval(timer)
  }, [store])
  return seconds
}
