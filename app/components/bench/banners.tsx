import { useEffect, useState } from 'react'
import type { BenchView } from '#app/benches/bench-view.server.ts'
import type { BenchState } from '#app/protocol/messages.ts'
import { useBridgeSeconds, useLink, useMakeSafeReport } from '#app/telemetry/telemetry.tsx'
import { AnswerLine } from '../answer-line.tsx'
import { ago } from '../figures.ts'
import { DeadManWarning } from './dead-man-warning.tsx'
import { lostLineSentence, lowerFirst, resetWaitsFor, shutdownSentence } from './shutdown-words.ts'
import { useCommand } from './use-command.ts'

type Props = { view: BenchView; state: BenchState | null }

/**
 * What needs a person now. What cannot wait stays in view below the header, wherever the page is scrolled to: where the
 * path of the energy fills the screen, it stands above it.
 */
export function Banners({ view, state }: Props) {
  const top = useHeaderHeight()
  return (
    <>
      <div
        style={{ top }}
        className="sticky z-30 grid max-xl:order-first max-h-[50dvh] grid-cols-[minmax(0,1fr)] gap-2 overflow-y-auto bg-ground empty:hidden"
      >
        <LinkBanner />
        {/* A trip by a lost line says it itself. */}
        {state?.phase === 'lost' && state.trip?.kind !== 'lost-line' && <LostBanner state={state} />}
        {state?.trip && <TripBanner view={view} state={state} />}
        {state?.controls?.warned && <DeadManWarning controls={state.controls} personId={view.person.id} />}
        <MakeSafeAnswer />
      </div>
      {state && !state.trip && state.phase !== 'lost' && <ShutdownNote state={state} />}
      {/* The lost line says all that its warnings say. */}
      {(state?.phase === 'lost' ? [] : (state?.warnings ?? [])).map((warning) => (
        <p key={warning} className="hatch border border-caution px-4 py-2 text-caution">
          <span className="bg-ground px-1">Caution: {lowerFirst(warning)}</span>
        </p>
      ))}
    </>
  )
}

/** Height of the header in pixels, which grows where its parts wrap. */
function useHeaderHeight(): number {
  const [height, setHeight] = useState(0)
  useEffect(() => {
    const header = document.querySelector('header')
    if (!header) return
    const observer = new ResizeObserver(() => setHeight(header.offsetHeight))
    observer.observe(header)
    return () => observer.disconnect()
  }, [])
  return height
}

function LinkBanner() {
  const link = useLink()
  if (link.kind === 'connected' || link.kind === 'connecting') return null
  return (
    <Hatched aside={link.kind === 'reconnecting' && <LostSince seconds={link.since} />}>
      {link.kind === 'refused' ? (
        <>
          <b>No telemetry.</b> {link.reason} Nothing on this page is live; make safe still works through the
          web application.
        </>
      ) : (
        <>
          <b>Voltage unknown: treat as live.</b> The link to the bridge is lost
          {link.reason ? ` (${link.reason})` : ''}: the figures below are old. Make safe is still tried in
          every way that is left; the emergency stop needs no link. This page keeps trying. If it lasts, tell
          the technician.
        </>
      )}
    </Hatched>
  )
}

/** Of this browser's clock, which is the one that lost the link. */
function LostSince({ seconds }: { seconds: number }) {
  // The tick alone is wanted: it renders this anew every second.
  useBridgeSeconds()
  return <>Lost {ago(Date.now() / 1000 - seconds)}.</>
}

function LostBanner({ state }: { state: BenchState }) {
  const now = useBridgeSeconds()
  return (
    <Hatched aside={now !== null && `Lost ${ago(now - state.since)}.`}>
      <b>Voltage unknown: treat as live.</b> {lostLineSentence(state)}
    </Hatched>
  )
}

/** A caution. What counts on stands beside the alert, so that it is not read out every second. */
function Hatched({ children, aside }: { children: React.ReactNode; aside: React.ReactNode }) {
  return (
    <div className="hatch border border-caution px-4 py-2.5">
      <div className="w-fit bg-ground px-1 text-caution">
        <p role="alert" className="inline">
          {children}
        </p>{' '}
        <span>{aside}</span>
      </div>
    </div>
  )
}

function TripBanner({ view, state }: { view: BenchView; state: BenchState }) {
  const now = useBridgeSeconds()
  const command = useCommand(view.bench.id)
  const { trip } = state
  if (!trip) return null
  const waits = resetWaitsFor(state, { mayReset: view.may.reset })
  return (
    <section
      aria-label="Trip"
      className="tripped flex flex-wrap items-center justify-between gap-x-6 gap-y-3 px-4 py-2.5"
    >
      <div className="min-w-0 flex-1 basis-80">
        <p role="alert">
          <b>Tripped: {lowerFirst(trip.happened)}</b> {trip.toDo}
        </p>
        <p>{shutdownSentence(state, now)}</p>
        <AnswerOnTrip reply={command.reply} />
      </div>
      <command.Form method="post" action={command.action}>
        <input type="hidden" name="kind" value="reset-trip" />
        <button
          type="submit"
          aria-disabled={waits !== null || command.isBusy}
          onClick={(event) => waits !== null && event.preventDefault()}
          className="min-h-9 cursor-pointer rounded-sm border border-current px-3.5 py-1.5 font-medium touch:min-h-12 aria-disabled:cursor-not-allowed aria-disabled:border-dashed"
        >
          {waits === null ? 'Reset' : `Reset: waits for ${waits}`}
        </button>
      </command.Form>
    </section>
  )
}

/** What became of a make safe of this page, until the bench's own state tells it. */
function MakeSafeAnswer() {
  const report = useMakeSafeReport()
  const isLinked = useLink().kind === 'connected'
  if (!report || (report.state === 'answered' && isLinked)) return null
  return (
    <p className={report.state === 'failed' ? 'tripped px-4 py-2' : 'border border-rule px-4 py-2'}>
      {report.sentence}
    </p>
  )
}

/** On the solid ground of the trip, the refusal cannot be in the trip's own colour. */
function AnswerOnTrip({ reply }: { reply: ReturnType<typeof useCommand>['reply'] }) {
  return (
    <div className="[&_p]:text-inherit">
      <AnswerLine reply={reply} />
    </div>
  )
}

/** After a make safe, until an output is on again: what was commanded and what has been measured since. */
function ShutdownNote({ state }: { state: BenchState }) {
  const now = useBridgeSeconds()
  if (!state.shutdown || now === null) return null
  if (state.anode.on || state.coils.on) return null
  return (
    <p className="border border-rule px-4 py-2">
      <b className="font-medium">{state.shutdown.cause}</b> {shutdownSentence(state, now)}
    </p>
  )
}
