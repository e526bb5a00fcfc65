import { useId, useState } from 'react'
import type { BenchState } from '#app/protocol/messages.ts'
import { fixed } from '../figures.ts'
import { stepNumber } from '../number-entry.ts'
import { useCommand } from './use-command.ts'

type Props = {
  benchId: string
  kind: 'set-anode' | 'set-coils'
  /** Name of the field that the command carries. */
  field: 'volts' | 'amps'
  label: string
  unit: string
  decimals: number
  step: number
  setpoint: BenchState['anode']
  progress: string
}

/** Type a number or step it; Enter in this field, or its button, applies it. A refused one stays as it was typed. */
export function SetpointControl(props: Props) {
  const { benchId, kind, field, label, unit, decimals, step, setpoint, progress } = props
  const id = useId()
  const command = useCommand(benchId)
  const [draft, setDraft] = useState<string | null>(null)
  const [answered, setAnswered] = useState(command.reply)
  if (command.reply !== answered) {
    setAnswered(command.reply)
    if (command.reply?.ok) setDraft(null)
  }
  const text = draft ?? fixed(setpoint.asked, decimals)
  const errors = command.reply && !command.reply.ok ? problems(command.reply, field) : []

  function move(direction: 1 | -1, isFine: boolean) {
    const size = isFine ? step / 10 : step
    setDraft(stepNumber({ text, step: size, decimals, limit: setpoint.limit, direction }))
  }
  const stepper = (direction: 1 | -1) => (
    <button
      type="button"
      onClick={(event) => move(direction, event.shiftKey)}
      aria-label={`${label} ${direction === 1 ? 'up' : 'down'}`}
      className="min-h-7 min-w-7 cursor-pointer rounded-sm border border-edge text-ink touch:min-h-12 touch:min-w-12"
    >
      {direction === 1 ? '+' : '−'}
    </button>
  )

  return (
    <command.Form method="post" action={command.action} className="mt-1 text-[12.5px] text-ink-soft">
      <input type="hidden" name="kind" value={kind} />
      <div className="flex flex-wrap items-center gap-1.5">
        {stepper(-1)}
        <label htmlFor={id} className="sr-only">
          {`${label}, ${unit}, at most ${fixed(setpoint.limit, decimals)}`}
        </label>
        <input
          id={id}
          name={field}
          inputMode="decimal"
          autoComplete="off"
          value={text}
          onChange={(event) => setDraft(event.target.value)}
          onFocus={(event) => event.target.select()}
          onKeyDown={(event) => {
            if (event.key !== 'ArrowUp' && event.key !== 'ArrowDown') return
            event.preventDefault()
            move(event.key === 'ArrowUp' ? 1 : -1, event.shiftKey)
          }}
          aria-invalid={errors.length > 0 || undefined}
          aria-describedby={`${id}-progress ${id}-error`}
          className="min-h-7 w-18 px-2 text-right touch:min-h-12"
        />
        {stepper(1)}
        <span>{unit}</span>
        {draft !== null && (
          <button type="submit" disabled={command.isBusy} className="button button-small">
            Set
          </button>
        )}
      </div>
      <p id={`${id}-progress`} className="mt-1">
        {progress}
      </p>
      <div id={`${id}-error`} role="alert">
        {errors.map((error) => (
          <p key={error} className="mt-1 font-medium text-trip">
            {error}
          </p>
        ))}
      </div>
    </command.Form>
  )
}

function problems(
  reply: { errors: Record<string, string[]>; refusals: { sentence: string }[] },
  field: string,
): string[] {
  const others = Object.entries(reply.errors).flatMap(([name, errors]) => (name === field ? [] : errors))
  return [...(reply.errors[field] ?? []), ...reply.refusals.map(({ sentence }) => sentence), ...others]
}
