import { href, Link } from 'react-router'
import { useBenchState, useLatest, useMakeSafe, usePicture } from '../../telemetry/telemetry.tsx'
import { firstOpen } from '../bench/contact-words.ts'
import { fixed, thinSpace } from '../figures.ts'
import { benchSummary, mayBeOn } from './attention.ts'
import { SmallTube } from './small-tube.tsx'

export type TileBench = {
  id: string
  name: string
  place: string
  bulbRadiusMetres: number
  gun: { xMetres: number; yMetres: number }
}

/** One bench of the hall: its tube, the two figures, who is at its controls, what stops its anode, and its make safe. */
export function BenchTile({ bench, maySafe }: { bench: TileBench; maySafe: boolean }) {
  const state = useBenchState(bench.id)
  const picture = usePicture(bench.id)
  const { attention, words } = benchSummary(state)
  const open = state && firstOpen(state)
  const isUnknown = !state || state.phase === 'lost'
  const foot = { trip: 'tripped', caution: 'hatch', none: '' }[attention]

  return (
    <article
      aria-label={bench.name}
      className="grid grid-cols-[var(--tile-tube)_minmax(0,1fr)] grid-rows-[auto_1fr_auto_auto] gap-x-4 gap-y-1 overflow-hidden rounded-md border border-rule bg-surface px-3.5 pt-2.5"
    >
      <h2 className="col-span-2 flex items-baseline justify-between gap-2">
        <Link
          to={href('/benches/:benchId', { benchId: bench.id })}
          className="link truncate font-medium touch:py-3"
        >
          {bench.name} <span className="font-normal text-ink-soft">{bench.place}</span>
        </Link>
        <span className={state?.phase === 'live' ? 'font-medium' : 'text-ink-soft'}>
          {state?.phase ?? 'no word'}
        </span>
      </h2>
      <div className="self-center">
        <SmallTube
          bulbRadiusMetres={bench.bulbRadiusMetres}
          gun={bench.gun}
          points={picture?.points ?? []}
          widthMillimetres={picture?.widthMillimetres ?? 1}
          isDark={isUnknown || !picture || picture.brightness <= 0}
        />
      </div>
      <div className="grid min-w-0 content-center gap-y-0.5">
        <dl className="grid grid-cols-[auto_minmax(0,1fr)] items-baseline gap-x-2.5 gap-y-0.5">
          <Figure name="anode" benchId={bench.id} channel="anodeVolts" digits={1} unit="V" />
          <Figure name="coils" benchId={bench.id} channel="coilAmps" digits={3} unit="A" />
        </dl>
        <p className="truncate text-right text-[12.5px] text-ink-soft">
          {state?.controls ? (
            <>
              <span className="sr-only">at the controls: </span>
              {state.controls.name}
            </>
          ) : (
            'controls free'
          )}
        </p>
      </div>
      <p className="col-span-2 line-clamp-2 min-h-[2.6em] text-[12.5px] leading-[1.3] text-ink-soft">
        {state?.phase !== 'live' && open?.reason}
      </p>
      <div
        className={`col-span-2 -mx-3.5 flex min-h-11 items-center justify-between gap-3 border-t border-rule px-3.5 py-1 text-[12.5px] leading-[1.25] ${foot}`}
      >
        <span
          className={attention === 'caution' ? 'bg-surface px-1' : attention === 'trip' ? 'font-medium' : ''}
        >
          {attention === 'trip' && <b>Tripped. </b>}
          {words}
        </span>
        {maySafe && <TileMakeSafe bench={bench} isTripped={attention === 'trip'} isQuiet={!mayBeOn(state)} />}
      </div>
    </article>
  )
}

type MakeSafeProps = { bench: TileBench; isTripped: boolean; isQuiet: boolean }

/** Always there and always enabled; loud only where something may be on. */
function TileMakeSafe({ bench, isTripped, isQuiet }: MakeSafeProps) {
  const makeSafe = useMakeSafe()
  const look = isTripped
    ? 'border-ground text-ground'
    : isQuiet
      ? 'border border-edge font-medium text-ink-soft'
      : 'bg-surface'
  return (
    <button
      type="button"
      className={`button button-safe min-h-8 shrink-0 px-2 py-1 text-[12px] touch:min-h-12 touch:px-3 ${look}`}
      onClick={() => makeSafe(bench.id)}
      aria-label={`Make ${bench.name} safe`}
    >
      Make safe
    </button>
  )
}

type FigureProps = {
  name: string
  benchId: string
  channel: 'anodeVolts' | 'coilAmps'
  digits: number
  unit: string
}

function Figure({ name, benchId, channel, digits, unit }: FigureProps) {
  const latest = useLatest(benchId, channel)
  return (
    <>
      <dt className="text-ink-soft">{name}</dt>
      <dd className="text-right text-[length:var(--tile-figure)] leading-[1.3] font-medium whitespace-nowrap">
        {fixed(latest?.value, digits)}
        <span className="font-normal">
          {thinSpace}
          {unit}
        </span>
      </dd>
    </>
  )
}
