import { useId, useState } from 'react'
import { href, useFetcher } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import type { TypedBenchView } from '#app/benches/bench-view.server.ts'
import { AnswerLine } from '../answer-line.tsx'
import { fixed, thinSpace } from '../figures.ts'
import { hasTicked } from './typed-steps.ts'

/** What the meters show, typed by a person: each number with its last digit, which tells how well it is known. */
export function TypedEntry({ view }: { view: TypedBenchView }) {
  const { benchId, limits, reversal } = view.bench.config
  const fetcher = useFetcher<ActionReply>()
  const [typed, setTyped] = useState({ volts: '', amps: '' })
  const [answered, setAnswered] = useState(fetcher.data)
  if (fetcher.data !== answered) {
    setAnswered(fetcher.data)
    if (fetcher.data?.ok) setTyped({ volts: '', amps: '' })
  }
  const isOpen = view.cautionsAcknowledged && hasTicked(view)
  const errors = fetcher.data && !fetcher.data.ok ? fetcher.data.errors : {}
  const field = (name: 'volts' | 'amps', label: string, unit: string, limit: string) => (
    <MeterField
      name={name}
      label={label}
      unit={unit}
      limit={limit}
      value={typed[name]}
      onType={(text) => setTyped((before) => ({ ...before, [name]: text }))}
      errors={errors[name]}
    />
  )
  return (
    <section aria-label="Type a reading">
      <fetcher.Form method="post" action={href('/benches/:benchId/typed-readings', { benchId })}>
        <fieldset disabled={!isOpen} className="grid min-w-0 gap-3">
          <legend className="mb-2 text-ink-soft">
            What the meters show, with every digit, zeros at the end too: the last digit tells how well it is
            known.
          </legend>
          <div className="grid gap-x-6 gap-y-3 sm:grid-cols-2">
            {field('volts', 'Anode voltage', 'V', fixed(limits.anodeVolts, 0))}
            {field('amps', 'Coil current', 'A', fixed(limits.coilAmps, 2))}
          </div>
          {reversal !== 'not' && <Sense />}
          <div className="flex flex-wrap items-center gap-x-4 gap-y-2">
            <button
              type="submit"
              disabled={!isOpen || fetcher.state !== 'idle'}
              className="button button-main max-sm:w-full"
            >
              Enter the reading
            </button>
            {!isOpen && (
              <p className="text-[12.5px] text-ink-soft">
                Waits for the cautions and the checklist of this run.
              </p>
            )}
          </div>
        </fieldset>
        <AnswerLine reply={fetcher.data} fields={['volts', 'amps']} className="pt-2" />
      </fetcher.Form>
    </section>
  )
}

type FieldProps = {
  name: string
  label: string
  unit: string
  limit: string
  value: string
  onType: (text: string) => void
  errors: string[] | undefined
}

function MeterField({ name, label, unit, limit, value, onType, errors }: FieldProps) {
  const id = useId()
  return (
    <div className="grid content-start gap-1">
      <p className="flex justify-between gap-3">
        <label htmlFor={id} className="font-medium">
          {label}, {unit}
        </label>
        <span id={`${id}-limit`} className="text-ink-soft">
          limit {limit}
          {thinSpace}
          {unit}
        </span>
      </p>
      <input
        id={id}
        name={name}
        inputMode="decimal"
        autoComplete="off"
        value={value}
        onChange={(event) => onType(event.target.value)}
        aria-invalid={errors ? true : undefined}
        aria-describedby={`${id}-limit${errors ? ` ${id}-error` : ''}`}
        className="min-h-11 w-full px-3 text-right text-[24px] font-bold tracking-tight"
      />
      {errors && (
        <p id={`${id}-error`} role="alert" className="font-medium text-trip">
          {errors.join(' ')}
        </p>
      )}
    </div>
  )
}

/** Which way the current goes through the coils, where the bench allows both. */
function Sense() {
  return (
    <fieldset className="flex flex-wrap items-center gap-x-5 gap-y-1">
      <legend className="sr-only">Sense of the coil current</legend>
      {[
        ['1', 'sense as commissioned, +B'],
        ['-1', 'sense reversed, −B'],
      ].map(([polarity, words]) => (
        <label key={polarity} className="flex cursor-pointer items-center gap-2 touch:min-h-12">
          <input type="radio" name="polarity" value={polarity} defaultChecked={polarity === '1'} />
          {words}
        </label>
      ))}
    </fieldset>
  )
}
