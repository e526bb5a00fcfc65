import type { BenchView } from '#app/benches/bench-view.server.ts'
import { useBenchState, useLink } from '#app/telemetry/telemetry.tsx'
import { Banners } from './banners.tsx'
import { nextStep, stepNames } from './bring-up.ts'
import { BringUpGuide } from './bring-up-guide.tsx'
import { CaptureButton } from './capture-button.tsx'
import { CautionsGlance } from './cautions-glance.tsx'
import { ChannelStrips } from './channel-strips.tsx'
import { Controls } from './controls.tsx'
import { EnergyPath } from './energy-path.tsx'
import { EventLog } from './event-log.tsx'
import { LiveResult } from './live-result.tsx'
import { Logbook } from './logbook.tsx'
import { edgesOf, readingWithDiameter } from './logbook-rows.ts'
import { RunHeader } from './run-header.tsx'
import { LiveTube } from './tube.tsx'
import { useFreshView } from './use-fresh-view.ts'

/** The bench from top to bottom: the path of the energy, what needs a person now, tube and channels, the logbook. */
export function BenchPage({ view, isAtControls }: { view: BenchView; isAtControls: boolean }) {
  const { config } = view.bench
  const state = useBenchState(config.benchId)
  useFreshView()
  const isLinked = useLink().kind === 'connected'
  const step =
    state &&
    isLinked &&
    nextStep({
      state,
      cautionsAcknowledged: view.cautionsAcknowledged,
      personId: view.person.id,
      readings: view.readings,
      bench: config,
    })
  const read = readingWithDiameter(view.readings)
  const mine = read && edgesOf(read, view.person.id).mine
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-4">
      {state && (
        <div className="flex flex-wrap items-center gap-x-6 gap-y-3 xl:min-h-13 xl:flex-nowrap">
          {step && <BringUpGuide step={step} order={stepNames} benchId={config.benchId} />}
          <Controls view={view} state={state} />
        </div>
      )}
      {state ? (
        <EnergyPath view={view} state={state} isAtControls={isAtControls} />
      ) : (
        <p className="border-x-[3px] border-ink px-4 py-6 text-ink-soft">
          Waiting for the bridge. Nothing is known of this bench yet: treat it as live.
        </p>
      )}
      <Banners view={view} state={state} />
      {/* The tube is as tall as the window leaves it; on a wide one the logbook's table stands beside it. */}
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-6 gap-y-4 lg:grid-cols-[clamp(360px,min(42vw,(100dvh_-_490px)*0.94),860px)_minmax(0,1fr)] xl:grid-cols-[clamp(360px,min(100vw_-_875px,42vw,(100dvh_-_490px)*0.94),860px)_minmax(0,1fr)] xl:grid-rows-[auto_1fr]">
        <div className="w-full min-w-0 max-lg:mx-auto max-lg:max-w-[520px] xl:sticky xl:top-18 xl:row-span-2 xl:self-start">
          <LiveTube
            benchId={config.benchId}
            config={config}
            edges={mine ? [mine.leftMetres, mine.rightMetres] : []}
          />
        </div>
        <div className="min-w-0">
          <ChannelStrips config={config} state={state} />
          <div className="grid gap-4 pt-3 md:grid-cols-[minmax(0,1fr)_auto]">
            <LiveResult view={view} state={state} />
            <CaptureButton view={view} state={state} />
          </div>
        </div>
        <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-2 lg:max-xl:col-span-2">
          <RunHeader view={view} />
          <Logbook view={view} />
        </div>
      </div>
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-10 gap-y-6 pt-2 lg:grid-cols-2">
        <EventLog view={view} />
        <CautionsGlance benchId={config.benchId} />
      </div>
    </div>
  )
}
