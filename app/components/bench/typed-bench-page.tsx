import type { TypedBenchView } from '#app/benches/bench-view.server.ts'
import { BringUpGuide } from './bring-up-guide.tsx'
import { CautionsGlance } from './cautions-glance.tsx'
import { Checklist } from './checklist.tsx'
import { StoredLog } from './event-log.tsx'
import { Logbook } from './logbook.tsx'
import { edgesOf, oldestFirst } from './logbook-rows.ts'
import { RunHeader } from './run-header.tsx'
import { Tube } from './tube.tsx'
import { TypedEntry } from './typed-entry.tsx'
import { TypedResult } from './typed-result.tsx'
import { nextTypedStep, typedStepNames } from './typed-steps.ts'
import { useFreshView } from './use-fresh-view.ts'

/** A bench without ports from top to bottom: its checklist, its scale and what the meters show, the logbook. */
export function TypedBenchPage({ view }: { view: TypedBenchView }) {
  const { config } = view.bench
  useFreshView()
  const read = oldestFirst(view.readings).findLast(({ struck, edges }) => !struck && edges.length > 0)
  const mine = read && edgesOf(read, view.person.id).mine
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-4">
      <BringUpGuide step={nextTypedStep(view)} order={typedStepNames} benchId={config.benchId} />
      <Checklist view={view} />
      {/* The meters are typed first: where the page is one column, before the scale. */}
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-6 gap-y-4 lg:grid-cols-[360px_minmax(0,1fr)] xl:grid-cols-[clamp(360px,min(100vw_-_875px,36vw),640px)_minmax(0,1fr)] xl:grid-rows-[auto_1fr]">
        <div className="w-full min-w-0 max-lg:order-last max-lg:mx-auto max-lg:max-w-[520px] xl:row-span-2">
          <Tube config={config} picture={null} edges={mine ? [mine.leftMetres, mine.rightMetres] : []} />
        </div>
        <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-5">
          <TypedEntry view={view} />
          <TypedResult view={view} />
        </div>
        <div className="grid min-w-0 grid-cols-[minmax(0,1fr)] content-start gap-2 lg:max-xl:col-span-2">
          <RunHeader view={view} />
          <Logbook view={view} />
        </div>
      </div>
      <div className="grid grid-cols-[minmax(0,1fr)] gap-x-10 gap-y-6 pt-2 lg:grid-cols-2">
        <StoredLog view={view} />
        <CautionsGlance benchId={config.benchId} />
      </div>
    </div>
  )
}
