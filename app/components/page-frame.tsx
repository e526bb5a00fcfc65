import { href, Link, useRouteLoaderData } from 'react-router'
import type { loader } from '../root.tsx'
import { Mark } from './mark.tsx'
import { RoomLightSwitch } from './room-light.tsx'

type Props = {
  /** What this page is: 'Hall', or a bench with its place. */
  where: React.ReactNode
  /** Said after the person's role: 'at the controls'. */
  standing?: React.ReactNode
  /** The make-safe button of this page. It stays in the header, above everything. */
  makeSafe?: React.ReactNode
  children: React.ReactNode
}

/** The header with the mark, the room light, the person and make safe; the page below it. Make safe is always in it. */
export function PageFrame({ where, standing, makeSafe, children }: Props) {
  const person = useRouteLoaderData<typeof loader>('root')?.person
  return (
    <>
      <header className="sticky top-0 z-50 flex flex-wrap items-center lg:flex-nowrap gap-x-5 gap-y-1 border-b border-rule bg-ground px-3 py-1.5 sm:px-6 sm:py-2.5">
        {/* First for the keyboard, last for the eye; where the header has two rows, in the first. */}
        {makeSafe && <div className="order-3 shrink-0 lg:order-6">{makeSafe}</div>}
        <span aria-hidden="true" className="order-3 w-full lg:hidden" />
        <Link
          to={href('/hall')}
          className="order-1 flex items-center gap-2 text-[17px] font-bold tracking-tight touch:min-h-12"
        >
          <Mark />
          <span className="max-sm:sr-only">Coilside</span>
        </Link>
        <div className="order-2 min-w-0 flex-1 lg:mr-auto lg:shrink-0">{where}</div>
        {person && (
          <Link
            to={href('/account')}
            className="order-4 min-w-0 truncate max-lg:mr-auto max-sm:text-[12.5px] lg:order-5 touch:py-3.5"
          >
            <b className="font-medium">{person.name}</b>{' '}
            <span className="text-ink-soft">
              {person.role}
              {standing && <span className="max-sm:sr-only"> · {standing}</span>}
            </span>
          </Link>
        )}
        <div className="order-5 shrink-0 lg:order-4">
          <RoomLightSwitch />
        </div>
      </header>
      <main className="px-3 py-4 sm:px-6">{children}</main>
    </>
  )
}
