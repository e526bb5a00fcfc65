import { scaleLinear } from 'd3-scale'
import { AxisX, tickFormat } from './axes.tsx'
import { Figure } from './figure.tsx'

type Props = {
  /** Lower bound of each bin and one more, ascending; and how many fell into each. */
  bounds: readonly number[]
  counts: readonly number[]
  interval: readonly [number, number] | null
  label: string
  caption: React.ReactNode
  fileName: string
}

const size = { width: 520, height: 230 }
const frame = { left: 14, right: 506, top: 12, bottom: 180 }

/** How often each value came, with the shortest interval that holds 95 % of them. */
export function Histogram({ bounds, counts, interval, label, caption, fileName }: Props) {
  const x = scaleLinear([bounds[0] ?? 0, bounds.at(-1) ?? 1], [frame.left, frame.right])
  const y = scaleLinear([0, Math.max(1, ...counts)], [frame.bottom, frame.top])
  return (
    <Figure
      {...size}
      description={`How often each value of ${label} came`}
      caption={caption}
      fileName={fileName}
      table={<Numbers bounds={bounds} counts={counts} label={label} />}
    >
      <AxisX scale={x} label={label} format={tickFormat(x, 6)} {...frame} />
      {counts.map((count, index) => {
        const left = bounds[index] ?? 0
        const right = bounds[index + 1] ?? left
        const isInside = interval !== null && right > interval[0] && left < interval[1]
        return (
          <rect
            key={left}
            x={x(left)}
            width={Math.max(0.5, x(right) - x(left) - 0.6)}
            y={y(count)}
            height={frame.bottom - y(count)}
            className={isInside ? 'fill-ink' : 'fill-edge'}
          />
        )
      })}
      {interval?.map((bound) => (
        <line
          key={bound}
          x1={x(bound)}
          x2={x(bound)}
          y1={frame.top}
          y2={frame.bottom}
          className="stroke-ink"
          strokeDasharray="4 3"
        />
      ))}
    </Figure>
  )
}

function Numbers({ bounds, counts, label }: Pick<Props, 'bounds' | 'counts' | 'label'>) {
  return (
    <table className="border-collapse text-right">
      <thead>
        <tr className="border-b border-ink text-ink-soft">
          <th scope="col" className="px-3 font-normal">
            {label}, from
          </th>
          <th scope="col" className="px-3 font-normal">
            to
          </th>
          <th scope="col" className="px-3 font-normal">
            count
          </th>
        </tr>
      </thead>
      <tbody>
        {counts.map((count, index) => (
          <tr key={bounds[index]} className="border-b border-rule">
            <td className="px-3">{bounds[index]?.toPrecision(5)}</td>
            <td className="px-3">{bounds[index + 1]?.toPrecision(5)}</td>
            <td className="px-3">{count}</td>
          </tr>
        ))}
      </tbody>
    </table>
  )
}
