import { fixed } from '../figures.ts'
import { Quantity } from '../quantity.tsx'

type Props = {
  title: string
  /** Right of the title: the limit, or on and off. */
  aside: React.ReactNode
  value: number | null
  unit: string
  decimals: number
  /** A figure that can hurt, or that nobody knows, is hatched and says so. */
  hazard?: string | null
  gauge: { label: string; value: number; mark?: number; max: number; unit: string } | null
  children: React.ReactNode
}

/** One station of the energy's path: its figure, its setting and its gauge. */
export function Stage({ title, aside, value, unit, decimals, hazard, gauge, children }: Props) {
  return (
    <section aria-label={title} className="min-w-0 px-4 py-0.5">
      <h2 className="flex justify-between gap-3 text-ink-soft">
        <span>{title}</span>
        <span className="text-right">{aside}</span>
      </h2>
      <p className="flex flex-wrap items-center gap-x-3">
        <Quantity
          value={value}
          unit={unit}
          decimals={decimals}
          className="text-[32px] leading-tight font-bold tracking-tight text-live"
          unitClassName="text-[16px] font-normal"
        />
        {hazard && (
          <span className="hatch border border-caution px-1.5 text-[12.5px] font-medium text-caution">
            {hazard}
          </span>
        )}
      </p>
      {children}
      {gauge && <Gauge {...gauge} />}
    </section>
  )
}

function Gauge({ label, value, mark, max, unit }: NonNullable<Props['gauge']>) {
  const part = (amount: number) => `${Math.min(100, Math.max(0, (amount / max) * 100))}%`
  return (
    <div
      role="img"
      aria-label={`${label}: ${fixed(value, 2)} of ${fixed(max, 2)} ${unit}`}
      className="relative mt-2 h-1.5 border border-edge"
    >
      <span className="absolute inset-y-0 left-0 bg-ink-soft" style={{ width: part(value) }} />
      {mark !== undefined && (
        <span className="absolute -inset-y-1 w-0.5 bg-ink" style={{ left: part(mark) }} />
      )}
    </div>
  )
}
