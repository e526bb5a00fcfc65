import { href, Link, useRouteLoaderData } from 'react-router'
import type { loader as rootLoader } from '../root.tsx'
import { Telemetry, useBenchState, useMakeSafeReport } from '../telemetry/telemetry.tsx'
import { DeadManWarning } from './bench/dead-man-warning.tsx'
import { MakeSafeButton } from './make-safe-button.tsx'
import { PageFrame } from './page-frame.tsx'
import { UnwatchedFrame } from './unwatched-frame.tsx'

type Props = {
  bench: { id: string; name: string; place: string; hasPorts: boolean }
  person: { id: string; role: string }
  children: React.ReactNode
}

/**
 * The frame of a page beside the bench's own. It keeps the link to the bridge open, so that whoever is at the controls
 * stays present while they read here, and has make safe in its header. Of a bench without ports there is no such link.
 */
export function BenchFrame(props: Props) {
  const socketUrl = useRouteLoaderData<typeof rootLoader>('root')?.socketUrl
  if (!props.bench.hasPorts) return <UnwatchedFrame bench={props.bench}>{props.children}</UnwatchedFrame>
  if (!socketUrl) return null
  return (
    <Telemetry key={props.bench.id} socketUrl={socketUrl} benchId={props.bench.id}>
      <Framed {...props} />
    </Telemetry>
  )
}

function Framed({ bench, person, children }: Props) {
  const controls = useBenchState(bench.id)?.controls
  const report = useMakeSafeReport()
  return (
    <PageFrame
      where={
        <Link to={href('/benches/:benchId', { benchId: bench.id })} className="block touch:py-3">
          <b className="font-medium">{bench.name}</b> <span className="text-ink-soft">{bench.place}</span>
        </Link>
      }
      standing={controls?.personId === person.id ? 'at the controls' : undefined}
      makeSafe={<MakeSafeButton benchId={bench.id} person={person} />}
    >
      <div className="mb-4 grid gap-2 empty:hidden">
        {controls?.warned && <DeadManWarning controls={controls} personId={person.id} />}
        {report && <p className="border-2 border-trip px-4 py-2">{report.sentence}</p>}
      </div>
      {children}
    </PageFrame>
  )
}
