import { type ScaleLinear, scaleLinear } from 'd3-scale'
import { useState } from 'react'
import { AxisX, AxisY, tickFormat, withAir } from './axes.tsx'
import { Figure } from './figure.tsx'

export type PlotPoint = {
  key: string
  label: string
  x: number
  y: number
  ux: number
  uy: number
  /** In units of its uncertainty; null where none is known. */
  residual: number | null
  isFlagged: boolean
}

/** The fitted line at some places, ascending in x, with the bounds of its confidence band. */
export type PlotLine = { x: number; y: number; low: number; high: number }[]

type Props = {
  points: readonly PlotPoint[]
  line: PlotLine
  x: { label: string; name: string }
  y: { label: string; name: string }
  caption: React.ReactNode
  fileName: string
}

const size = { width: 520, height: 430 }
const frame = { left: 58, right: 508, top: 24, bottom: 270 }
const lower = { top: 306, bottom: 384 }

/** Readings with their uncertainties, the fitted line with its band, and below them the residuals. */
export function SeriesPlot({ points, line, x, y, caption, fileName }: Props) {
  const [chosen, setChosen] = useState<string | null>(null)
  const acrossX = scaleLinear(withAir(points.flatMap((point) => [point.x - point.ux, point.x + point.ux])), [
    frame.left,
    frame.right,
  ])
  const [lowX = 0, highX = 1] = acrossX.domain()
  const seen = line.filter((place) => place.x >= lowX && place.x <= highX)
  const acrossY = scaleLinear(
    withAir([
      ...points.flatMap((point) => [point.y - point.uy, point.y + point.uy]),
      ...seen.flatMap(({ low, high }) => [low, high]),
    ]),
    [frame.bottom, frame.top],
  )
  const largest = Math.max(2.5, ...points.map(({ residual }) => 1.15 * Math.abs(residual ?? 0)))
  const acrossResidual = scaleLinear([-largest, largest], [lower.bottom, lower.top])
  const point = points.find(({ key }) => key === chosen) ?? null

  return (
    <div className="grid min-w-0 grid-cols-1 content-start gap-1">
      <Figure
        {...size}
        description={`${y.name} against ${x.name} of ${points.length} readings with their uncertainties, the fitted line and its residuals`}
        caption={caption}
        fileName={fileName}
        table={<Numbers points={points} x={x} y={y} />}
        onPoint={(at) => setChosen(nearest(points, at, acrossX, acrossY))}
      >
        <AxisX scale={acrossX} label="" format={String} {...frame} isLabelled={false} />
        <AxisY scale={acrossY} label={y.label} format={tickFormat(acrossY, 5)} {...frame} />
        <Line line={seen} x={acrossX} y={acrossY} />
        <AxisX scale={acrossX} label={x.label} format={tickFormat(acrossX, 6)} {...lower} />
        <AxisY
          scale={acrossResidual}
          label="residual, in standard deviations"
          format={tickFormat(acrossResidual, 3)}
          left={frame.left}
          right={frame.right}
          ticks={3}
        />
        <line
          x1={frame.left}
          x2={frame.right}
          y1={acrossResidual(0)}
          y2={acrossResidual(0)}
          className="stroke-ink-soft"
        />
        {points.map((it) => (
          <Marks
            key={it.key}
            point={it}
            isChosen={it.key === chosen}
            x={acrossX}
            y={acrossY}
            residual={acrossResidual}
          />
        ))}
      </Figure>
      <Chooser points={points} chosen={point} onChoose={setChosen} />
    </div>
  )
}

type Across = ScaleLinear<number, number>

function Line({ line, x, y }: { line: PlotLine; x: Across; y: Across }) {
  const place = (at: number, value: number) => `${x(at).toFixed(1)} ${y(value).toFixed(1)}`
  const there = line.map((it) => place(it.x, it.high))
  const back = [...line].reverse().map((it) => place(it.x, it.low))
  if (line.length < 2) return null
  return (
    <>
      <path d={`M${there.join('L')}L${back.join('L')}Z`} className="fill-edge" opacity={0.28} />
      <path
        d={`M${line.map((it) => place(it.x, it.y)).join('L')}`}
        className="fill-transparent stroke-ink"
        strokeWidth={1.2}
      />
    </>
  )
}

/** One reading in both parts: its bars, and a square where it is flagged, so that it is told by shape. */
function Marks({
  point,
  isChosen,
  x,
  y,
  residual,
}: {
  point: PlotPoint
  isChosen: boolean
  x: Across
  y: Across
  residual: Across
}) {
  const mark = (atY: number) =>
    point.isFlagged ? (
      <rect
        x={x(point.x) - 4}
        y={atY - 4}
        width={8}
        height={8}
        className="fill-ground stroke-ink"
        strokeWidth={1.6}
      />
    ) : (
      <circle cx={x(point.x)} cy={atY} r={isChosen ? 5 : 3} className="fill-ink stroke-ink" />
    )
  return (
    <g>
      <g className="stroke-ink" strokeWidth={1}>
        <line x1={x(point.x - point.ux)} x2={x(point.x + point.ux)} y1={y(point.y)} y2={y(point.y)} />
        <line x1={x(point.x)} x2={x(point.x)} y1={y(point.y - point.uy)} y2={y(point.y + point.uy)} />
      </g>
      {mark(y(point.y))}
      {point.residual !== null && (
        <>
          <line
            x1={x(point.x)}
            x2={x(point.x)}
            y1={residual(0)}
            y2={residual(point.residual)}
            className="stroke-ink-soft"
          />
          {mark(residual(point.residual))}
        </>
      )}
      {isChosen && (
        <text x={x(point.x) + 8} y={y(point.y) - 8} className="fill-ink" fontWeight={700}>
          {point.label}
        </text>
      )}
    </g>
  )
}

/** A reading by arrow keys too; what it says is read out. */
function Chooser({
  points,
  chosen,
  onChoose,
}: {
  points: readonly PlotPoint[]
  chosen: PlotPoint | null
  onChoose: (key: string) => void
}) {
  const index = chosen ? points.indexOf(chosen) : 0
  return (
    <div className="flex flex-wrap items-center gap-x-3 text-[12.5px]">
      <label className="flex items-center gap-2 text-ink-soft">
        reading
        <input
          type="range"
          min={0}
          max={points.length - 1}
          value={index}
          aria-valuetext={chosen ? `reading ${chosen.label}` : 'none chosen'}
          onChange={(event) => {
            const point = points[Number(event.target.value)]
            if (point) onChoose(point.key)
          }}
        />
      </label>
      <output className="min-h-5">
        {chosen &&
          `${chosen.label}: residual ${chosen.residual === null ? 'not known' : signed(chosen.residual)}${chosen.isFlagged ? ', flagged' : ''}`}
      </output>
    </div>
  )
}

function Numbers({ points, x, y }: Pick<Props, 'points' | 'x' | 'y'>) {
  const headings = ['reading', x.label, 'u', y.label, 'u', 'residual']
  return (
    <table className="border-collapse text-right">
      <thead>
        <tr className="border-b border-ink text-ink-soft">
          {headings.map((heading, index) => (
            // biome-ignore lint/suspicious/noArrayIndexKey: two columns bear the same heading and none ever moves
            <th key={index} scope="col" className="px-3 font-normal whitespace-nowrap">
              {heading}
            </th>
          ))}
        </tr>
      </thead>
      <tbody>
        {points.map((point) => (
          <tr key={point.key} className="border-b border-rule">
            <th scope="row" className="px-3 font-normal">
              {point.label}
              {point.isFlagged && ' flagged'}
            </th>
            {[point.x, point.ux, point.y, point.uy].map((value, column) => (
              // biome-ignore lint/suspicious/noArrayIndexKey: the columns stand still
              <td key={column} className="px-3">
                {value.toPrecision(column % 2 === 0 ? 6 : 2)}
              </td>
            ))}
            <td className="px-3">{point.residual === null ? '—' : signed(point.residual)}</td>
          </tr>
        ))}
      </tbody>
    </table>
  )
}

const signed = (value: number): string => `${value < 0 ? '−' : '+'}${Math.abs(value).toFixed(1)}`

function nearest(points: readonly PlotPoint[], at: { x: number; y: number }, x: Across, y: Across) {
  let best: string | null = null
  let least = 30
  for (const point of points) {
    const distance = Math.hypot(x(point.x) - at.x, y(point.y) - at.y)
    if (distance < least) {
      least = distance
      best = point.key
    }
  }
  return best
}
