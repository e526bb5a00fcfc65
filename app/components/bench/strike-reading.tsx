import { useId, useState } from 'react'
import { useFetcher } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import { AnswerLine } from '../answer-line.tsx'
import { Dialog, DialogCancel } from '../dialog.tsx'

type Props = {
  /** Where the strike is sent. */
  action: string
  readingId: string
  number: number
}

/** Strikes a reading, with a reason. It stays in the logbook and counts no longer. */
export function StrikeReading({ action, readingId, number }: Props) {
  const id = useId()
  const fetcher = useFetcher<ActionReply>()
  const [isOpen, setOpen] = useState(false)
  const [reason, setReason] = useState('')
  const [answered, setAnswered] = useState(fetcher.data)
  if (fetcher.data !== answered) {
    setAnswered(fetcher.data)
    if (fetcher.data?.ok) setOpen(false)
  }
  const errors = fetcher.data && !fetcher.data.ok ? fetcher.data.errors.reason : undefined
  return (
    <>
      <button type="button" onClick={() => setOpen(true)} className="link-alone">
        strike<span className="sr-only"> reading {number}</span>
      </button>
      <Dialog isOpen={isOpen} onOpenChange={setOpen} title={`Strike reading ${number}`}>
        <p>
          It stays in the logbook, struck through with your reason, and counts no longer. This cannot be
          undone.
        </p>
        <fetcher.Form method="post" action={action} className="grid gap-4">
          <input type="hidden" name="readingId" value={readingId} />
          <div className="grid gap-1">
            <label htmlFor={id} className="font-medium">
              Reason
            </label>
            <input
              id={id}
              name="reason"
              autoComplete="off"
              maxLength={300}
              value={reason}
              onChange={(event) => setReason(event.target.value)}
              aria-invalid={errors ? true : undefined}
              aria-describedby={errors ? `${id}-error` : undefined}
              className="min-h-10 px-3"
            />
            {errors && (
              <p id={`${id}-error`} role="alert" className="font-medium text-trip">
                {errors.join(' ')}
              </p>
            )}
          </div>
          <AnswerLine reply={fetcher.data?.ok ? undefined : fetcher.data} fields={['reason']} />
          <div className="flex flex-wrap gap-3">
            <button type="submit" className="button button-main" disabled={fetcher.state !== 'idle'}>
              Strike it
            </button>
            <DialogCancel>Keep it</DialogCancel>
          </div>
        </fetcher.Form>
      </Dialog>
    </>
  )
}
