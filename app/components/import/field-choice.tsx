import { useId } from 'react'
import { type ImportChoice, ownField } from '#app/imports/form.ts'
import type { ImportBench } from '#app/imports/import-view.ts'
import { ImportSection } from './import-section.tsx'

type Props = { benches: ImportBench[]; choice: ImportChoice }

/** Whose coils the readings belong to: a bench's, whose newest data count, or a field factor that is stated. */
export function FieldChoice({ benches, choice }: Props) {
  const isOwn = choice.bench === ownField
  return (
    <ImportSection title="Whose field">
      <fieldset className="grid gap-x-6 sm:grid-cols-[repeat(auto-fill,minmax(250px,1fr))]">
        <legend className="sr-only">The bench whose data the readings use</legend>
        {benches.map(({ id, name, place }) => (
          <Choice key={id} value={id} chosen={choice.bench}>
            {name} <span className="text-ink-soft">{place}</span>
          </Choice>
        ))}
        <Choice value={ownField} chosen={choice.bench}>
          none of these: a field factor of its own
        </Choice>
      </fieldset>
      {isOwn && (
        <div className="flex flex-wrap gap-x-6 gap-y-3">
          <Factor
            name="teslaPerAmp"
            label="Field factor, T/A"
            value={choice.teslaPerAmp}
            hint="as in 7.40e-4"
          />
          <Factor
            name="uTeslaPerAmp"
            label="its standard uncertainty, T/A"
            value={choice.uTeslaPerAmp}
            hint="0 where it is taken as exact"
          />
        </div>
      )}
      {!isOwn && (
        <>
          <input type="hidden" name="teslaPerAmp" value={choice.teslaPerAmp} />
          <input type="hidden" name="uTeslaPerAmp" value={choice.uTeslaPerAmp} />
        </>
      )}
    </ImportSection>
  )
}

type ChoiceProps = { value: string; chosen: string; children: React.ReactNode }

function Choice({ value, chosen, children }: ChoiceProps) {
  return (
    <label className="flex min-h-9 cursor-pointer items-center gap-3 touch:min-h-12">
      <input type="radio" name="bench" value={value} defaultChecked={chosen === value} />
      <span>{children}</span>
    </label>
  )
}

type FactorProps = { name: string; label: string; value: string; hint: string }

function Factor({ name, label, value, hint }: FactorProps) {
  const id = useId()
  return (
    <div className="grid gap-1">
      <label htmlFor={id} className="font-medium">
        {label}
      </label>
      <input
        id={id}
        name={name}
        defaultValue={value}
        inputMode="decimal"
        autoComplete="off"
        aria-describedby={`${id}-hint`}
        className="min-h-9 w-56 px-3 text-right touch:min-h-12"
      />
      <p id={`${id}-hint`} className="text-[12.5px] text-ink-soft">
        {hint}
      </p>
    </div>
  )
}
