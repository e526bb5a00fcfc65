import { useEffect, useRef } from 'react'
import { href, useFetcher } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import type { BenchView } from '#app/benches/bench-view.server.ts'
import type { BenchState } from '#app/protocol/messages.ts'
import { useLink } from '#app/telemetry/telemetry.tsx'
import { AnswerLine } from '../answer-line.tsx'
import { captureWaitsFor } from './capture-words.ts'

/** Takes the settled window as a reading: by its button, or by Ctrl+Enter from anywhere on the page. */
export function CaptureButton({ view, state }: { view: BenchView; state: BenchState | null }) {
  const benchId = view.bench.id
  const fetcher = useFetcher<ActionReply>()
  const form = useRef<HTMLFormElement>(null)
  const waits = captureWaitsFor(state, { isLinked: useLink().kind === 'connected', person: view.person })
  const isHeld = waits !== null || fetcher.state !== 'idle'

  useEffect(() => {
    const onKey = (event: KeyboardEvent) => {
      if (event.key !== 'Enter' || !event.ctrlKey || event.repeat) return
      event.preventDefault()
      form.current?.requestSubmit()
    }
    window.addEventListener('keydown', onKey, { capture: true })
    return () => window.removeEventListener('keydown', onKey, { capture: true })
  }, [])

  return (
    <div className="grid gap-1 md:max-w-72 md:justify-items-end md:justify-self-end md:pt-5 md:text-right">
      <fetcher.Form
        ref={form}
        method="post"
        action={href('/benches/:benchId/readings', { benchId })}
        onSubmit={(event) => isHeld && event.preventDefault()}
      >
        <button
          type="submit"
          className="button button-main max-md:min-h-12 max-md:w-full"
          aria-disabled={isHeld}
          aria-keyshortcuts="Control+Enter"
          aria-describedby="capture-waits"
        >
          Capture{' '}
          <span aria-hidden="true" className="pl-1 font-normal max-sm:hidden">
            Ctrl Enter
          </span>
        </button>
      </fetcher.Form>
      <p id="capture-waits" className="text-[12.5px] text-ink-soft">
        {waits}
      </p>
      <AnswerLine reply={fetcher.data} className="text-[12.5px]" />
    </div>
  )
}
