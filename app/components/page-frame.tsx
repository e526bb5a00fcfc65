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

/** The header with the mark, the room light, the person and make safe; the page below it. */
export function PageFrame({ where, standing, makeSafe, children }: Props) {
  const person = useRouteLoaderData<typeof loader>('root')?.person
  return (
    <>
      <header className="sticky top-0 z-50 flex flex-wrap items-center gap-x-5 gap-y-2 border-b border-rule bg-ground px-3 py-2.5 sm:px-6">
        <Link to={href('/hall')} className="flex items-center gap-2 text-[17px] font-bold tracking-tight">
          <Mark />
          <span className="max-[420px]:sr-only">Coilside</span>
        </Link>
        <div className="min-w-0">{where}</div>
        <div className="ml-auto flex flex-wrap items-center gap-x-5 gap-y-2">
          <RoomLightSwitch />
          {person && (
            <Link to={href('/account')} className="max-sm:order-last">
              <b className="font-medium">{person.name}</b>{' '}
              <span className="text-ink-soft">
                {person.role}
                {standing && <> · {standing}</>}
              </span>
            </Link>
          )}
          {makeSafe}
        </div>
      </header>
      <main className="px-3 py-4 sm:px-6">{children}</main>
    </>
  )
}
