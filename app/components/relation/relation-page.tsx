import { useId } from 'react'
import { Form, useNavigation } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import type { RelationReply, RelationView } from '#app/runs/relation-view.ts'
import { AnswerLine } from '../answer-line.tsx'
import { Checked } from './checked.tsx'
import { OwnValues } from './own-values.tsx'
import { SymbolTable } from './symbol-table.tsx'

type Props = { view: RelationView; answered: RelationReply | ActionReply | undefined }

/** A person's own formula for e/m: its symbols, the formula, what the check says, and the values that it gives. */
export function RelationPage({ view, answered }: Props) {
  const id = useId()
  const isBusy = useNavigation().state !== 'idle'
  const reply = answered && 'typed' in answered ? answered : undefined
  const typed = reply?.typed ?? view.relation
  const isUnread = reply?.check?.readAs === null
  return (
    <div className={`grid max-w-6xl grid-cols-1 gap-6 ${view.isRealBench ? 'dark:[--beam:var(--ink)]' : ''}`}>
      <header className="grid gap-1">
        <h1 className="text-xl font-bold">Your own relation for e/m</h1>
        <p className="max-w-prose text-ink-soft">
          Write what e/m is equal to, from what is set and read at the bench and known of its coils, in your
          own symbols. The check names the kind of a slip, and leaves the finding to you.
        </p>
      </header>
      <Form
        method="post"
        preventScrollReset
        replace
        className="grid grid-cols-1 gap-x-12 gap-y-5 lg:grid-cols-[minmax(0,5fr)_minmax(0,6fr)]"
      >
        <div className="grid content-start gap-2">
          <SymbolTable typed={typed?.symbols ?? {}} errors={reply?.errors ?? {}} />
          <p className="text-[12.5px] text-ink-soft">Leave empty what your formula does without.</p>
        </div>
        <div className="grid grid-cols-1 content-start gap-4">
          <div className="grid gap-1">
            <label htmlFor={id} className="font-medium">
              e/m =
            </label>
            <textarea
              id={id}
              name="formula"
              rows={2}
              defaultValue={typed?.text ?? ''}
              autoComplete="off"
              autoCapitalize="none"
              spellCheck={false}
              aria-describedby={`${id}-hint`}
              aria-invalid={isUnread || undefined}
              onKeyDown={submitOnEnter}
              className="w-full px-3 py-2"
            />
            <p id={`${id}-hint`} className="text-[12.5px] text-ink-soft">
              As in 3 a (b + c)² / d^(1/2): a space or · multiplies, ^ raises, sqrt(a) takes the root. Numbers
              with a decimal point; π is known.
            </p>
          </div>
          <button
            type="submit"
            className="button button-main max-sm:w-full sm:justify-self-start"
            disabled={isBusy}
          >
            Check
          </button>
          <Checked check={reply?.check ?? null} coils={view.coils} />
          {answered && !reply && <AnswerLine reply={answered as ActionReply} />}
        </div>
      </Form>
      <OwnValues {...view} />
    </div>
  )
}

/** A formula has one line, however it is wrapped: Enter asks for the check. */
function submitOnEnter(event: React.KeyboardEvent<HTMLTextAreaElement>) {
  if (event.key !== 'Enter' || event.nativeEvent.isComposing) return
  event.preventDefault()
  event.currentTarget.form?.requestSubmit()
}
