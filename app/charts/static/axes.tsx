import type { ScaleLinear } from 'd3-scale'

export const fontSize = 12

type AxisProps = { scale: ScaleLinear<number, number>; label: string; format: (value: number) => string }

/** The horizontal axis with its ticks at the foot of a plot; `labelled` says whether the ticks bear numbers. */
export function AxisX({
  scale,
  label,
  format,
  top,
  bottom,
  ticks = 6,
  isLabelled = true,
}: AxisProps & { top: number; bottom: number; ticks?: number; isLabelled?: boolean }) {
  const [left = 0, right = 0] = scale.range()
  return (
    <g>
      {scale.ticks(ticks).map((value) => (
        <g key={value} transform={`translate(${scale(value)} 0)`}>
          <line y1={top} y2={bottom} className="stroke-rule" strokeWidth={0.6} />
          <line y1={bottom} y2={bottom + 4} className="stroke-ink-soft" />
          {isLabelled && (
            <text y={bottom + 4 + fontSize} textAnchor="middle" className="fill-ink-soft">
              {format(value)}
            </text>
          )}
        </g>
      ))}
      <line x1={left} x2={right} y1={bottom} y2={bottom} className="stroke-ink-soft" />
      {isLabelled && (
        <text x={right} y={bottom + 6 + 2.2 * fontSize} textAnchor="end" className="fill-ink">
          {label}
        </text>
      )}
    </g>
  )
}

/** The vertical axis with its ticks at the left of a plot. */
export function AxisY({
  scale,
  label,
  format,
  left,
  right,
  ticks = 5,
}: AxisProps & { left: number; right: number; ticks?: number }) {
  const [bottom = 0, top = 0] = scale.range()
  return (
    <g>
      {scale.ticks(ticks).map((value) => (
        <g key={value} transform={`translate(0 ${scale(value)})`}>
          <line x1={left} x2={right} className="stroke-rule" strokeWidth={0.6} />
          <line x1={left - 4} x2={left} className="stroke-ink-soft" />
          <text x={left - 7} y={0.35 * fontSize} textAnchor="end" className="fill-ink-soft">
            {format(value)}
          </text>
        </g>
      ))}
      <line x1={left} x2={left} y1={bottom} y2={top} className="stroke-ink-soft" />
      <text x={left} y={top - 8} className="fill-ink">
        {label}
      </text>
    </g>
  )
}

/** Ticks of a step written with as many decimals as the step needs. */
export function tickFormat(scale: ScaleLinear<number, number>, ticks: number): (value: number) => string {
  const [first = 0, second = first + 1] = scale.ticks(ticks)
  const decimals = Math.max(0, -Math.floor(Math.log10(Math.abs(second - first)) + 1e-9))
  return (value) => (Object.is(value, -0) ? 0 : value).toFixed(decimals).replace('-', '−')
}

/** The domain that holds all values, and a little air about them. */
export function withAir(values: readonly number[], part = 0.06): [number, number] {
  const low = Math.min(...values)
  const high = Math.max(...values)
  const air = (high - low || Math.abs(high) || 1) * part
  return [low - air, high + air]
}
