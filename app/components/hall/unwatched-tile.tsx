import { href, Link } from 'react-router'
import type { TileBench } from './bench-tile.tsx'
import { SmallTube } from './small-tube.tsx'

/** A bench without ports. Nothing is known of it but that it is there; no make safe reaches it. */
export function UnwatchedTile({ bench }: { bench: TileBench }) {
  return (
    <article
      aria-label={bench.name}
      className="grid grid-cols-[var(--tile-tube)_minmax(0,1fr)] grid-rows-[auto_1fr_auto] gap-x-4 gap-y-1 overflow-hidden rounded-md border border-dashed border-edge bg-surface px-3.5 pt-2.5"
    >
      <h2 className="col-span-2 flex items-baseline justify-between gap-2">
        <Link
          to={href('/benches/:benchId', { benchId: bench.id })}
          className="link truncate font-medium touch:py-3"
        >
          {bench.name} <span className="font-normal text-ink-soft">{bench.place}</span>
        </Link>
        <span className="whitespace-nowrap text-ink-soft">not watched</span>
      </h2>
      <div className="self-center">
        <SmallTube
          bulbRadiusMetres={bench.bulbRadiusMetres}
          gun={bench.gun}
          points={[]}
          widthMillimetres={1}
          isDark
        />
      </div>
      <p className="self-center text-ink-soft">
        This software does not measure it. Whether a voltage is on is seen at the bench alone.
      </p>
      <p className="col-span-2 -mx-3.5 flex min-h-11 items-center border-t border-rule px-3.5 py-1 text-[12.5px] leading-[1.25]">
        no instruments: not watched, and no make safe reaches it
      </p>
    </article>
  )
}
