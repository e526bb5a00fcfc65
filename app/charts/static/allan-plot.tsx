import { scaleLog } from 'd3-scale'
import { fontSize } from './axes.tsx'
import { Figure } from './figure.tsx'

type Point = { seconds: number; deviation: number; standardUncertainty: number }
type Props = { points: readonly Point[]; best: Point; unit: string; caption: string; fileName: string }

const size = { width: 520, height: 300 }
const frame = { left: 66, right: 508, top: 26, bottom: 248 }

/** The Allan deviation against the averaging time, both logarithmic, with the best averaging time marked. */
export function AllanPlot({ points, best, unit, caption, fileName }: Props) {
  const positive = points.filter(({ deviation }) => deviation > 0)
  const bounds = (values: number[]): [number, number] => [
    Math.min(...values) / 1.4,
    Math.max(...values) * 1.4,
  ]
  const x = scaleLog(bounds(positive.map(({ seconds }) => seconds)), [frame.left, frame.right])
  const y = scaleLog(
    bounds(positive.flatMap((point) => [point.deviation, point.deviation + point.standardUncertainty])),
    [frame.bottom, frame.top],
  )
  const place = (point: Point) => `${x(point.seconds).toFixed(1)} ${y(point.deviation).toFixed(1)}`
  return (
    <Figure
      {...size}
      description={`Allan deviation against averaging time; it is least at ${best.seconds.toPrecision(2)} s`}
      caption={caption}
      fileName={fileName}
      table={<Numbers points={points} unit={unit} />}
    >
      {ticksOf(x.domain()).map((value) => (
        <g key={value} transform={`translate(${x(value)} 0)`}>
          <line y1={frame.top} y2={frame.bottom} className="stroke-rule" strokeWidth={0.6} />
          <text y={frame.bottom + 4 + fontSize} textAnchor="middle" className="fill-ink-soft">
            {plain(value)}
          </text>
        </g>
      ))}
      {ticksOf(y.domain()).map((value) => (
        <g key={value} transform={`translate(0 ${y(value)})`}>
          <line x1={frame.left} x2={frame.right} className="stroke-rule" strokeWidth={0.6} />
          <text x={frame.left - 6} y={0.35 * fontSize} textAnchor="end" className="fill-ink-soft">
            {plain(value)}
          </text>
        </g>
      ))}
      <text x={frame.left} y={frame.top - 8} className="fill-ink">
        Allan deviation, {unit}
      </text>
      <text x={frame.right} y={frame.bottom + 6 + 2.2 * fontSize} textAnchor="end" className="fill-ink">
        averaging time, s
      </text>
      <path
        d={`M${positive.map(place).join('L')}`}
        className="fill-transparent stroke-ink"
        strokeWidth={1.2}
      />
      {positive.map((point) => (
        <g key={point.seconds} className="stroke-ink">
          <line
            x1={x(point.seconds)}
            x2={x(point.seconds)}
            y1={y(Math.max(point.deviation - point.standardUncertainty, y.domain()[0] ?? 0))}
            y2={y(point.deviation + point.standardUncertainty)}
          />
          <circle
            cx={x(point.seconds)}
            cy={y(point.deviation)}
            r={point === best ? 5 : 3}
            className="fill-ink"
          />
        </g>
      ))}
    </Figure>
  )
}

/** The powers of ten within the bounds, and twos and fives where there are few. */
function ticksOf([low = 1, high = 10]: number[]): number[] {
  const ticks: number[] = []
  const steps = Math.log10(high / low) > 2.2 ? [1] : [1, 2, 5]
  for (let power = Math.floor(Math.log10(low)); power <= Math.log10(high); power++)
    for (const step of steps) {
      const value = step * 10 ** power
      if (value >= low && value <= high) ticks.push(value)
    }
  return ticks
}

const plain = (value: number): string => String(Number(value.toPrecision(2)))

function Numbers({ points, unit }: Pick<Props, 'points' | 'unit'>) {
  return (
    <table className="border-collapse text-right">
      <thead>
        <tr className="border-b border-ink text-ink-soft">
          {['averaging time, s', `Allan deviation, ${unit}`, 'u'].map((heading) => (
            <th key={heading} scope="col" className="px-3 font-normal">
              {heading}
            </th>
          ))}
        </tr>
      </thead>
      <tbody>
        {points.map((point) => (
          <tr key={point.seconds} className="border-b border-rule">
            <td className="px-3">{point.seconds.toPrecision(3)}</td>
            <td className="px-3">{point.deviation.toPrecision(3)}</td>
            <td className="px-3">{point.standardUncertainty.toPrecision(2)}</td>
          </tr>
        ))}
      </tbody>
    </table>
  )
}
