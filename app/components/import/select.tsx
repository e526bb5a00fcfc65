import { useId } from 'react'

type Props = {
  name: string
  label: string
  isLabelHidden?: boolean
  value: string
  options: readonly (readonly [value: string, words: string])[]
}

/** A labelled choice among a few. */
export function Select({ name, label, isLabelHidden = false, value, options }: Props) {
  const id = useId()
  return (
    <div className="grid gap-1">
      <label htmlFor={id} className={isLabelHidden ? 'sr-only' : 'text-[12.5px] text-ink-soft'}>
        {label}
      </label>
      <select
        id={id}
        name={name}
        defaultValue={value}
        className="min-h-9 w-full min-w-0 px-2.5 touch:min-h-12"
      >
        {options.map(([option, words]) => (
          <option key={option} value={option}>
            {words}
          </option>
        ))}
      </select>
    </div>
  )
}
