import { href, Link } from 'react-router'
import { useBenchState, useLatest, useMakeSafe, usePicture } from '../../telemetry/telemetry.tsx'
import { fixed } from '../figures.ts'
import { benchSummary } from './attention.ts'
import { SmallTube } from './small-tube.tsx'

export type TileBench = {
  id: string
  name: string
  place: string
  bulbRadiusMetres: number
  gun: { xMetres: number; yMetres: number }
}

/** One bench of the hall: its tube, the two figures, what stops its anode, who is at the controls, and its make safe. */
export function BenchTile({ bench, maySafe }: { bench: TileBench; maySafe: boolean }) {
  const state = useBenchState(bench.id)
  const picture = usePicture(bench.id)
  const makeSafe = useMakeSafe()
  const { attention, words } = benchSummary(state)
  const open = state?.contacts.find((contact) => !contact.closed)
  const isUnknown = !state || state.phase === 'lost'

  return (
    <article
      aria-label={bench.name}
      className="grid grid-cols-[92px_1fr] gap-x-3.5 gap-y-1 rounded-md border border-rule bg-surface px-3.5 pt-3"
    >
      <h2 className="col-span-2 flex items-baseline justify-between gap-2">
        <Link to={href('/benches/:benchId', { benchId: bench.id })} className="link font-medium">
          {bench.name} <span className="font-normal text-ink-soft">{bench.place}</span>
        </Link>
        <span className={state?.phase === 'live' ? 'font-medium' : 'text-ink-soft'}>
          {state?.phase ?? 'no word'}
        </span>
      </h2>
      <SmallTube
        bulbRadiusMetres={bench.bulbRadiusMetres}
        gun={bench.gun}
        points={picture?.points ?? []}
        widthMillimetres={picture?.widthMillimetres ?? 1}
        isDark={isUnknown || !picture || picture.brightness <= 0}
      />
      <dl className="grid grid-cols-[auto_1fr] content-center gap-x-2.5 gap-y-0.5">
        <Figure name="anode" benchId={bench.id} channel="anodeVolts" digits={1} unit="V" />
        <Figure name="coils" benchId={bench.id} channel="coilAmps" digits={3} unit="A" />
      </dl>
      <p className="col-span-2 min-h-9 text-[12.5px] leading-snug text-ink-soft">
        {state?.phase !== 'live' && open?.reason ? open.reason : ''}
      </p>
      <div
        className={`col-span-2 -mx-3.5 mt-1 flex min-h-11 items-center justify-between gap-3 border-t border-rule px-3.5 py-1.5 text-[12.5px] ${
          attention === 'trip' ? 'tripped rounded-b-md font-medium' : attention === 'caution' ? 'hatch' : ''
        }`}
      >
        <span>
          {attention === 'trip' && <b>Tripped. </b>}
          {words}
        </span>
        {maySafe && (
          <button
            type="button"
            className={`button button-safe min-h-8 shrink-0 px-2 py-1 text-[12px] ${attention === 'trip' ? 'border-ground text-ground' : 'bg-surface'}`}
            onClick={() => makeSafe(bench.id)}
            aria-label={`Make ${bench.name} safe`}
          >
            Make safe
          </button>
        )}
      </div>
    </article>
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
  const value = latest?.value
  return (
    <>
      <dt className="text-ink-soft">{name}</dt>
      <dd className="text-right font-medium whitespace-nowrap">
        {value == null ? '–' : fixed(value, digits)} <span className="font-normal">{unit}</span>
      </dd>
    </>
  )
}
