import { href, useFetcher, useLocation, useRouteLoaderData } from 'react-router'
import type { loader } from '../root.tsx'
import type { clientAction } from '../routes/account/room-light.ts'

/** The two looks of the interface. It changes at once; the server stores it and the reload renders it. */
export function RoomLightSwitch() {
  const fetcher = useFetcher<typeof clientAction>()
  const location = useLocation()
  const stored = useRouteLoaderData<typeof loader>('root')?.roomLight ?? 'lit'
  const isRefused = fetcher.state === 'idle' && fetcher.data !== undefined && 'refusals' in fetcher.data
  const light = fetcher.formData?.get('roomLight') ?? stored
  return (
    <fetcher.Form
      method="post"
      action={href('/room-light')}
      className="flex items-center gap-2"
      onSubmit={(event) => {
        // With scripts the person stays where they are, whatever page they have gone to by the time of the answer.
        event.preventDefault()
        const { submitter } = event.nativeEvent as SubmitEvent
        if (submitter instanceof HTMLButtonElement)
          fetcher.submit({ roomLight: submitter.value }, { method: 'post', action: href('/room-light') })
      }}
    >
      <span className="text-ink-soft max-xl:sr-only" id="room-light">
        room light
      </span>
      <span role="status" className="text-trip empty:hidden">
        {isRefused && 'not stored'}
      </span>
      <input type="hidden" name="returnTo" value={location.pathname + location.search} />
      <fieldset aria-labelledby="room-light" className="flex rounded-sm border border-edge">
        {(['dark', 'lit'] as const).map((value) => (
          <button
            key={value}
            type="submit"
            name="roomLight"
            value={value}
            aria-pressed={light === value}
            className="min-h-8 cursor-pointer px-2.5 text-ink-soft touch:min-h-12 touch:px-3 aria-pressed:bg-ink aria-pressed:text-ground"
          >
            {value}
          </button>
        ))}
      </fieldset>
    </fetcher.Form>
  )
}
