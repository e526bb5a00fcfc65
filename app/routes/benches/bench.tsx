import { useEffect } from 'react'
import { href, isRouteErrorResponse, Link, useRouteLoaderData } from 'react-router'
import type { BenchView } from '../../benches/bench-view.server.ts'
import { loadBenchView } from '../../benches/bench-view.server.ts'
import { BenchPage } from '../../components/bench/bench-page.tsx'
import { TypedBenchPage } from '../../components/bench/typed-bench-page.tsx'
import { MakeSafeButton } from '../../components/make-safe-button.tsx'
import { PageFrame } from '../../components/page-frame.tsx'
import { UnwatchedFrame } from '../../components/unwatched-frame.tsx'
import { databaseContext, personContext } from '../../context.ts'
import type { loader as rootLoader } from '../../root.tsx'
import { Telemetry, useBenchState } from '../../telemetry/telemetry.tsx'
import type { Route } from './+types/bench'

export async function loader({ params, context }: Route.LoaderArgs) {
  const person = context.get(personContext)
  return loadBenchView(context.get(databaseContext), { benchId: params.benchId, person })
}

const lastViews = new Map<string, Awaited<ReturnType<typeof loader>>>()

/** While the web application is silent the page keeps what it last knew; the live values come from the bridge. */
export async function clientLoader({ params, serverLoader }: Route.ClientLoaderArgs) {
  try {
    const view = await serverLoader()
    lastViews.set(params.benchId, view)
    return view
  } catch (error) {
    const known = lastViews.get(params.benchId)
    const isMeant = error instanceof Response || (isRouteErrorResponse(error) && error.status < 500)
    if (!known || isMeant) throw error
    return known
  }
}

export default function Bench({ loaderData: view }: Route.ComponentProps) {
  const socketUrl = useRouteLoaderData<typeof rootLoader>('root')?.socketUrl
  useEffect(() => {
    lastViews.set(view.bench.id, view)
  }, [view])
  if ('ticked' in view)
    return (
      <UnwatchedFrame bench={view.bench}>
        <title>{`${view.bench.name} · Coilside`}</title>
        <TypedBenchPage key={view.bench.id} view={view} />
      </UnwatchedFrame>
    )
  if (!socketUrl) return null
  return (
    <Telemetry key={view.bench.id} socketUrl={socketUrl} benchId={view.bench.id}>
      <title>{`${view.bench.name} · Coilside`}</title>
      <Framed view={view} />
    </Telemetry>
  )
}

function Framed({ view }: { view: BenchView }) {
  const isAtControls = useBenchState(view.bench.id)?.controls?.personId === view.person.id
  return (
    <PageFrame
      where={
        <h1 className="items-baseline gap-x-2 leading-tight sm:flex">
          <Link to={href('/hall')} className="text-ink-soft max-sm:hidden">
            Hall /
          </Link>
          <b className="font-medium whitespace-nowrap">{view.bench.name}</b>
          <span className="text-ink-soft truncate max-sm:block max-sm:text-[12.5px]">{view.bench.place}</span>
        </h1>
      }
      standing={isAtControls ? 'at the controls' : undefined}
      makeSafe={<MakeSafeButton benchId={view.bench.id} person={view.person} />}
    >
      <BenchPage view={view} isAtControls={isAtControls} />
    </PageFrame>
  )
}
