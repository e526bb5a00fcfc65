import type { ReadingView } from '#app/benches/bench-view.server.ts'
import type { CommissionedBench } from '#app/protocol/bench-config.ts'
import { fixed } from '../figures.ts'

type Props = {
  /** The form that the fields belong to. */
  form: string
  reading: ReadingView
  scale: Extract<CommissionedBench['scale'], { kind: 'rungs' }>
  isEntry: boolean
  errors: Record<string, string[]>
  className: string
}

/** The rung that the beam met, and how far the current could be moved: what is read where others read two edges. */
export function RungCells({ form, reading, scale, isEntry, errors, className }: Props) {
  const { rung, number } = reading
  const about = (field: string) => (errors[field] ? `${form}-${field}` : undefined)
  if (!isEntry)
    return (
      <>
        <td className={className} data-name="rung">
          {rung?.rung}
        </td>
        <td className={className} data-name="moved ± A">
          {rung && fixed(rung.settingHalfWidthAmps, 3)}
        </td>
      </>
    )
  return (
    <>
      <td className={className} data-name="rung">
        <fieldset aria-describedby={about('rung')} className="inline-grid text-left">
          <legend className="sr-only">Reading {number}, the rung that the beam meets</legend>
          {scale.rungs.map(({ name }) => (
            <label key={name} className="flex cursor-pointer items-center gap-2 touch:min-h-12">
              <input form={form} type="radio" name="rung" value={name} defaultChecked={rung?.rung === name} />
              {name}
            </label>
          ))}
        </fieldset>
        <FieldError id={`${form}-rung`} errors={errors.rung} />
      </td>
      <td className={className} data-name="moved ± A">
        <input
          form={form}
          name="halfWidth"
          aria-label={`Reading ${number}, how far the current can be moved before the beam leaves the rung, in A`}
          placeholder="if tried"
          inputMode="decimal"
          autoComplete="off"
          defaultValue={rung?.settingHalfWidthAmps?.toString() ?? ''}
          aria-invalid={errors.halfWidth ? true : undefined}
          aria-describedby={about('halfWidth')}
          className="min-h-8 w-24 border-ink px-2 text-right font-medium placeholder:font-normal placeholder:text-ink-soft stacked:w-full stacked:max-w-40 touch:min-h-12"
        />
        <FieldError id={`${form}-halfWidth`} errors={errors.halfWidth} />
      </td>
    </>
  )
}

function FieldError({ id, errors }: { id: string; errors: string[] | undefined }) {
  return (
    errors && (
      <span
        id={id}
        role="alert"
        className="block max-w-44 text-[12.5px] whitespace-normal text-trip stacked:max-w-full"
      >
        {errors.join(' ')}
      </span>
    )
  )
}
