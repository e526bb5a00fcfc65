import { href, Link, useRouteLoaderData } from 'react-router'
import { may } from '../../auth/capabilities.ts'
import { hasPorts, listVisibleBenches, type VisibleBench } from '../../benches/visible-benches.server.ts'
import { roomWords } from '../../components/hall/attention.ts'
import { BenchTile, type TileBench } from '../../components/hall/bench-tile.tsx'
import { HoldButton } from '../../components/hall/hold-button.tsx'
import { UnwatchedTile } from '../../components/hall/unwatched-tile.tsx'
import { useAttentionOrder, useStates } from '../../components/hall/use-states.ts'
import { PageFrame } from '../../components/page-frame.tsx'
import { databaseContext, personContext } from '../../context.ts'
import type { loader as rootLoader } from '../../root.tsx'
import {
  Telemetry,
  useLink,
  useMakeSafe,
  useMakeSafeReport,
  useTelemetryStore,
} from '../../telemetry/telemetry.tsx'
import type { Route } from './+types/hall'

export async function loader({ context }: Route.LoaderArgs) {
  const person = context.get(personContext)
  const benches = await listVisibleBenches(context.get(databaseContext), person)
  return {
    benches: benches.filter(hasPorts).map(toTile),
    unwatched: benches.filter((bench) => !hasPorts(bench)).map(toTile),
    mayMakeSafe: may(person.role, 'make-bench-safe'),
    mayMakeRoomSafe: may(person.role, 'make-room-safe'),
  }
}

function toTile({ id, name, place, config }: VisibleBench): TileBench {
  return { id, name, place, bulbRadiusMetres: config.tube.bulbRadiusMetres, gun: config.gun }
}

export default function Hall({ loaderData }: Route.ComponentProps) {
  const socketUrl = useRouteLoaderData<typeof rootLoader>('root')?.socketUrl ?? ''
  return (
    <Telemetry socketUrl={socketUrl}>
      <title>Hall · Coilside</title>
      <PageFrame
        where={
          <div className="flex flex-wrap items-baseline gap-x-5">
            <h1>
              <b className="font-medium">Hall</b>{' '}
              <RoomWords benches={loaderData.benches} unwatched={loaderData.unwatched.length} />
            </h1>
            <Link to={href('/runs')} className="link-alone">
              Runs
            </Link>
          </div>
        }
        makeSafe={loaderData.mayMakeRoomSafe && <RoomMakeSafe />}
      >
        <LinkLine />
        <Tiles
          benches={loaderData.benches}
          unwatched={loaderData.unwatched}
          maySafe={loaderData.mayMakeSafe}
        />
      </PageFrame>
    </Telemetry>
  )
}

function RoomWords({ benches, unwatched }: { benches: TileBench[]; unwatched: number }) {
  const words = useStates(
    useTelemetryStore(),
    benches,
    (states) => roomWords(states, unwatched),
    roomWords(
      benches.map(() => null),
      unwatched,
    ),
  )
  return <span className="text-ink-soft">{words}</span>
}

function RoomMakeSafe() {
  const makeSafe = useMakeSafe()
  return (
    <>
      <span id="room-make-safe" className="sr-only">
        Commands every output of the room off. Hold for a second, or press twice within three seconds by
        keyboard.
      </span>
      <HoldButton describedBy="room-make-safe" onHeld={() => makeSafe(null)}>
        Make room safe: hold
      </HoldButton>
    </>
  )
}

/** What the link to the bridge is doing when it is not simply there, and the answer to the last make safe. */
function LinkLine() {
  const link = useLink()
  const report = useMakeSafeReport()
  return (
    <div className="mb-3 grid gap-2 empty:hidden">
      {link.kind === 'refused' && <p className="hatch border border-caution px-3 py-2">{link.reason}</p>}
      {link.kind === 'reconnecting' && (
        <p className="hatch border border-caution px-3 py-2">
          No word from the bridge: what is shown is old. Treat every bench as live. This page keeps trying;
          the emergency stops need no link.
        </p>
      )}
      {report && <p className="border border-ink px-3 py-2">{report.sentence}</p>}
    </div>
  )
}

/** How much room a tile has: four rows of six fit on a 1080p screen, and three do not look lost on it. */
function crowdOf(benches: number): 'few' | 'some' | 'many' {
  if (benches <= 3) return 'few'
  return benches <= 12 ? 'some' : 'many'
}

type TilesProps = { benches: TileBench[]; unwatched: TileBench[]; maySafe: boolean }

/** By need of attention; those that nobody is told of come last. */
function Tiles({ benches, unwatched, maySafe }: TilesProps) {
  const ordered = useAttentionOrder(useTelemetryStore(), benches)
  const all = benches.length + unwatched.length
  if (all === 0)
    return (
      <p className="max-w-prose">
        No bench is open to you yet. Benches come with a class: ask your instructor to add you to it.
      </p>
    )
  return (
    <div className="tiles" data-crowd={crowdOf(all)}>
      {ordered.map((bench) => (
        <BenchTile key={bench.id} bench={bench} maySafe={maySafe} />
      ))}
      {unwatched.map((bench) => (
        <UnwatchedTile key={bench.id} bench={bench} />
      ))}
    </div>
  )
}
