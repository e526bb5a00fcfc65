import type { BenchView } from '#app/benches/bench-view.server.ts'
import { useBenchState } from '#app/telemetry/telemetry.tsx'
import { Banners } from './banners.tsx'
import { nextStep } from './bring-up.ts'
import { BringUpGuide } from './bring-up-guide.tsx'
import { CaptureButton } from './capture-button.tsx'
import { CautionsGlance } from './cautions-glance.tsx'
import { ChannelStrips } from './channel-strips.tsx'
import { Controls } from './controls.tsx'
import { EnergyPath } from './energy-path.tsx'
import { EventLog } from './event-log.tsx'
import { LiveResult } from './live-result.tsx'
import { Logbook } from './logbook.tsx'
import { edgesOf, readingWithEdges } from './logbook-rows.ts'
import { RunHeader } from './run-header.tsx'
import { Tube } from './tube.tsx'
import { useFreshView } from './use-fresh-view.ts'

/** The bench from top to bottom: the path of the energy, what needs a person now, tube and channels, the logbook. */
export function BenchPage({ view, isAtControls }: { view: BenchView; isAtControls: boolean }) {
  const { config } = view.bench
  const state = useBenchState(config.benchId)
  useFreshView()
  const step =
    state &&
    nextStep({
      state,
      cautionsAcknowledged: view.cautionsAcknowledged,
      personId: view.person.id,
      readings: view.readings,
    })
  const read = readingWithEdges(view.readings)
  const mine = read && edgesOf(read, view.person.id).mine
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-4">
      {state ? (
        <>
          <Controls view={view} state={state} />
          <EnergyPath view={view} state={state} isAtControls={isAtControls} />
        </>
      ) : (
        <p className="border-x-[3px] border-ink px-4 py-6 text-ink-soft">
          Waiting for the bridge. Nothing is known of this bench yet: treat it as live.
        </p>
      )}
      <Banners view={view} state={state} />
      {step && <BringUpGuide step={step} benchId={config.benchId} />}
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-6 gap-y-4 lg:grid-cols-[minmax(0,420px)_minmax(0,1fr)] 2xl:grid-cols-[minmax(0,480px)_minmax(0,1fr)]">
        <Tube
          benchId={config.benchId}
          config={config}
          edges={mine ? [mine.leftMetres, mine.rightMetres] : []}
        />
        <div className="min-w-0">
          <ChannelStrips config={config} state={state} />
          <div className="grid gap-4 pt-3 md:grid-cols-[minmax(0,1fr)_auto] md:items-end">
            <LiveResult view={view} state={state} />
            <CaptureButton view={view} state={state} />
          </div>
        </div>
      </div>
      <div className="grid grid-cols-[minmax(0,1fr)] gap-2">
        <RunHeader view={view} />
        <Logbook view={view} />
      </div>
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-10 gap-y-6 pt-2 lg:grid-cols-2">
        <EventLog view={view} />
        <CautionsGlance benchId={config.benchId} />
      </div>
    </div>
  )
}
