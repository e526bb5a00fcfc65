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
    <section aria-label="Controls" className="flex flex-wrap items-center gap-x-4 gap-y-2 xl:ml-auto">
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
      {/* What was done shows in the line itself; it is said to whoever does not see it. */}
      <AnswerLine
        reply={command.reply}
        className={command.reply && !command.reply.ok ? 'basis-full text-[12.5px] xl:text-right' : 'sr-only'}
      />
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
            {/* No list that drops down: the browser marks its choice in a blue of its own. */}
            <fieldset className="grid max-h-[40dvh] grid-cols-[minmax(0,1fr)] overflow-y-auto">
              <legend className="mb-1 font-medium">To whom</legend>
              {others.map((person) => (
                <label
                  key={person.id}
                  className={`flex min-h-9 items-center gap-3 border-b border-rule py-1.5 touch:min-h-12 ${person.acknowledged ? 'cursor-pointer' : 'text-ink-soft'}`}
                >
                  <input
                    type="radio"
                    name="toPersonId"
                    value={person.id}
                    checked={toPersonId === person.id}
                    disabled={!person.acknowledged}
                    onChange={() => setToPersonId(person.id)}
                  />
                  <span>
                    {person.name}, {person.role}
                    {person.acknowledged ? '' : ': cautions not acknowledged'}
                  </span>
                </label>
              ))}
            </fieldset>
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
