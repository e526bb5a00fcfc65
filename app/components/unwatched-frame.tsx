import { href, Link } from 'react-router'
import { PageFrame } from './page-frame.tsx'

type Props = { bench: { id: string; name: string; place: string }; children: React.ReactNode }

/**
 * The frame of a page of a bench without ports. There is nothing that could be commanded from it: where other benches have
 * make safe it says who switches off.
 */
export function UnwatchedFrame({ bench, children }: Props) {
  return (
    <PageFrame
      where={
        <Link to={href('/benches/:benchId', { benchId: bench.id })} className="block touch:py-3">
          <b className="font-medium">{bench.name}</b> <span className="text-ink-soft">{bench.place}</span>
        </Link>
      }
      makeSafe={
        <p className="hatch max-w-40 border border-caution px-2.5 py-1 text-[12.5px] leading-tight font-medium text-caution sm:max-w-none">
          <span className="bg-ground px-1">Switch off at the supplies</span>
        </p>
      }
    >
      {children}
    </PageFrame>
  )
}
