import { useEffect } from 'react'
import type { BenchState } from '#app/protocol/messages.ts'
import { useBridgeSeconds, useShowPresence } from '#app/telemetry/telemetry.tsx'
import { beep } from './beep.ts'

type Props = { controls: NonNullable<BenchState['controls']>; personId: string }

const beepMilliseconds = 3000

/** The dead-man's warning: who is missed, when the bench makes safe, and the button that says otherwise. */
export function DeadManWarning({ controls, personId }: Props) {
  const now = useBridgeSeconds()
  const showPresence = useShowPresence()
  const isMe = controls.personId === personId
  useEffect(() => {
    if (!isMe) return
    beep()
    const timer = setInterval(beep, beepMilliseconds)
    return () => clearInterval(timer)
  }, [isMe])

  const left = now === null ? null : Math.max(0, Math.ceil(controls.presentUntil - now))
  const when = left === null ? 'soon' : `in ${left} s`
  return (
    <section aria-label="Dead-man" className="hatch border-2 border-caution p-2.5">
      <div className="flex flex-wrap items-center justify-between gap-x-6 gap-y-2 bg-ground px-2.5 py-2 text-caution">
        <div className="min-w-0 flex-1 basis-60">
          <p role="alert">
            <b>{isMe ? 'Are you at the bench?' : `${controls.name} has not been seen at the controls.`}</b>{' '}
            {isMe && 'Nothing has been touched on this page for a while.'}
          </p>
          <p>The bridge makes this bench safe {when}.</p>
        </div>
        {isMe && (
          <button
            type="button"
            onClick={showPresence}
            className="button button-main min-h-12 px-6 max-sm:w-full"
          >
            I am here
          </button>
        )}
      </div>
    </section>
  )
}
