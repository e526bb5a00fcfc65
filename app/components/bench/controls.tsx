import { useState } from 'react'
import type { BenchView } from '#app/benches/bench-view.server.ts'
import type { BenchState } from '#app/protocol/messages.ts'
import { AnswerLine } from '../answer-line.tsx'
import { Dialog, DialogCancel } from '../dialog.tsx'
import { useCommand } from './use-command.ts'

type Props = { view: BenchView; state: BenchState }

/** Who is at the controls, and the ways to take them, hand them over, release them or take them over. */
export function Controls({ view, state }: Props) {
  const command = useCommand(view.bench.id)
  const [isTakingOver, setTakingOver] = useState(false)
  const holder = state.controls
  const isMe = holder?.personId === view.person.id
  const send = (kind: string) => (
    <command.Form method="post" action={command.action}>
      <input type="hidden" name="kind" value={kind} />
      <button type="submit" className="button" disabled={command.isBusy}>
        {kind === 'take-controls' ? 'Take the controls' : 'Release the controls'}
      </button>
    </command.Form>
  )
  return (
    <section aria-label="Controls" className="flex flex-wrap items-center gap-x-4 gap-y-2">
      <p>
        <span className="text-ink-soft">at the controls: </span>
        {holder ? (
          <b className="font-medium">
            {holder.name}
            {isMe && ' (you)'}
          </b>
        ) : (
          'nobody'
        )}
      </p>
      {!holder && view.may.takeControls && send('take-controls')}
      {isMe && send('release-controls')}
      {isMe && <HandOver view={view} />}
      {holder && !isMe && view.may.takeOver && (
        <button type="button" className="button" onClick={() => setTakingOver(true)}>
          Take over
        </button>
      )}
      <AnswerLine reply={command.reply} className="text-[12.5px] text-ink-soft" />
      {holder && (
        <Dialog isOpen={isTakingOver} onOpenChange={setTakingOver} title={`Take over from ${holder.name}`}>
          <p>
            {holder.name} loses the controls at once and is told so. The outputs stay as they are. It is
            logged with your name.
          </p>
          <command.Form
            method="post"
            action={command.action}
            onSubmit={() => setTakingOver(false)}
            className="flex flex-wrap gap-3"
          >
            <input type="hidden" name="kind" value="take-over" />
            <button type="submit" className="button button-main">
              Take over the controls
            </button>
            <DialogCancel>Leave them</DialogCancel>
          </command.Form>
        </Dialog>
      )}
    </section>
  )
}

function HandOver({ view }: { view: BenchView }) {
  const command = useCommand(view.bench.id)
  const [isOpen, setOpen] = useState(false)
  const [toPersonId, setToPersonId] = useState('')
  const [answered, setAnswered] = useState(command.reply)
  if (command.reply !== answered) {
    setAnswered(command.reply)
    if (command.reply?.ok) setOpen(false)
  }
  const others = view.people.filter(({ id }) => id !== view.person.id)
  return (
    <>
      <button type="button" className="button" onClick={() => setOpen(true)}>
        Hand over
      </button>
      <Dialog isOpen={isOpen} onOpenChange={setOpen} title="Hand over the controls">
        {others.length === 0 ? (
          <p>There is nobody to hand over to. Release the controls instead.</p>
        ) : (
          <command.Form method="post" action={command.action} className="grid gap-4">
            <input type="hidden" name="kind" value="hand-over" />
            <label className="grid grid-cols-[minmax(0,1fr)] gap-1">
              <span className="font-medium">To whom</span>
              <select
                name="toPersonId"
                value={toPersonId}
                onChange={(event) => setToPersonId(event.target.value)}
                className="min-h-10 w-full min-w-0 px-2"
              >
                <option value="">Choose a person</option>
                {others.map((person) => (
                  <option key={person.id} value={person.id} disabled={!person.acknowledged}>
                    {person.name}, {person.role}
                    {person.acknowledged ? '' : ' (cautions not acknowledged)'}
                  </option>
                ))}
              </select>
            </label>
            <AnswerLine reply={command.reply?.ok ? undefined : command.reply} />
            <div className="flex flex-wrap gap-3">
              <button
                type="submit"
                className="button button-main"
                disabled={toPersonId === '' || command.isBusy}
              >
                Hand over
              </button>
              <DialogCancel>Keep them</DialogCancel>
            </div>
          </command.Form>
        )}
      </Dialog>
    </>
  )
}
