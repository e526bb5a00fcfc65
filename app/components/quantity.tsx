import { fixed, thinSpace } from './figures.ts'

type Props = {
  value: number | null | undefined
  unit: string
  decimals: number
  className?: string
  /** Class of the unit, which is set smaller than a large figure. */
  unitClassName?: string
}

/** A value and its unit on one line, a dash where there is no reading. */
export function Quantity({ value, unit, decimals, className, unitClassName }: Props) {
  return (
    <span className={`whitespace-nowrap ${className ?? ''}`}>
      {fixed(value, decimals)}
      <span className={unitClassName}>
        {thinSpace}
        {unit}
      </span>
    </span>
  )
}
