import { useId } from 'react'

type Props = Omit<React.ComponentProps<'input'>, 'id'> & {
  label: string
  hint?: string
  errors?: string[] | undefined
}

/** A labelled field with its hint and, beside it, what is wrong with what was typed. */
export function TextField({ label, hint, errors, ...input }: Props) {
  const id = useId()
  const isWrong = Boolean(errors?.length)
  return (
    <div className="grid gap-1">
      <label htmlFor={id} className="font-medium">
        {label}
      </label>
      <input
        {...input}
        id={id}
        className="min-h-10 w-full px-3"
        aria-invalid={isWrong || undefined}
        aria-describedby={
          [hint && `${id}-hint`, isWrong && `${id}-error`].filter(Boolean).join(' ') || undefined
        }
      />
      {hint && (
        <p id={`${id}-hint`} className="text-[12.5px] text-ink-soft">
          {hint}
        </p>
      )}
      {isWrong && (
        <p id={`${id}-error`} role="alert" className="font-medium text-trip">
          {errors?.join(' ')}
        </p>
      )}
    </div>
  )
}
