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
    <section aria-label="Dead-man" className="hatch border-2 border-caution px-4 py-3">
      <div className="flex flex-wrap items-center gap-4">
        <p role="alert" className="bg-ground px-1 text-caution">
          <b>{isMe ? 'Are you at the bench?' : `${controls.name} has not been seen at the controls.`}</b>{' '}
          {isMe && 'Nothing has been touched on this page for a while.'}
        </p>
        <p className="bg-ground px-1 text-caution">The bridge makes this bench safe {when}.</p>
        {isMe && (
          <button type="button" onClick={showPresence} className="button button-main">
            I am here
          </button>
        )}
      </div>
    </section>
  )
}
