import { useEffect, useRef } from 'react'
import uPlot from 'uplot'
import 'uplot/dist/uPlot.min.css'
import type { Channel } from '#app/safety/types.ts'
import type { Trace } from '#app/telemetry/ring-buffer.ts'
import { useTelemetryStore } from '#app/telemetry/telemetry.tsx'
import { drawEachFrame } from './frame-loop.ts'
import { heldRange, type Range, stripRange } from './strip-range.ts'
import { plotColours, useRoomLight } from './theme.ts'

type Props = {
  benchId: string
  channel: Channel
  /** Seconds shown, the newest at the right. */
  spanSeconds: number
  /** Length of the settled window in seconds, shaded at the right; null shades nothing. */
  windowSeconds: number | null
  /** The last seconds that the axis is fitted to once the setpoint stands; null shows all that is visible. */
  steadySeconds: number | null
  tolerance: number
  /** Whether the axis of time is drawn below: strips that stand above one another share it. */
  hasTimeAxis: boolean
  /** What the strip shows, in words, for whoever does not see it. */
  text: string
}

const plotHeight = 58
const timeAxisHeight = 22

/** One channel over time, drawn from the ring buffer outside React. */
export function LiveStrip(props: Props) {
  const { benchId, channel, spanSeconds, windowSeconds, steadySeconds, tolerance, hasTimeAxis, text } = props
  const box = useRef<HTMLDivElement>(null)
  const shown = useRef({ windowSeconds, steadySeconds })
  const store = useTelemetryStore()
  const light = useRoomLight()
  useEffect(() => {
    shown.current = { windowSeconds, steadySeconds }
  }, [windowSeconds, steadySeconds])

  useEffect(() => {
    const element = box.current
    if (!element) return
    let range: Range = [0, tolerance * 2]
    const height = plotHeight + (hasTimeAxis ? timeAxisHeight : 0)
    const plot = new uPlot(
      optionsOf({
        width: element.clientWidth,
        height,
        spanSeconds,
        hasTimeAxis,
        light,
        range: () => range,
        windowSeconds: () => shown.current.windowSeconds,
      }),
      [[], []],
      element,
    )
    const resize = new ResizeObserver(() => plot.setSize({ width: element.clientWidth, height }))
    resize.observe(element)
    // A reader who wants no motion sees the trace step on once a second.
    const leastSeconds = matchMedia('(prefers-reduced-motion: reduce)').matches ? 1 : 1 / 30
    const trace: Trace = { seconds: [], values: [] }
    let drawn = 0
    let held: Range | null = null
    const stop = drawEachFrame(() => {
      const now = store.bridgeSeconds()
      if (now - drawn < leastSeconds) return
      drawn = now
      store.ring(benchId).read(channel, now, spanSeconds, trace)
      const steady = shown.current.steadySeconds
      const wanted = stripRange({ trace, steadySeconds: steady, tolerance })
      held = steady === null ? null : heldRange(held, wanted)
      range = held ?? wanted
      plot.setData([trace.seconds, trace.values])
    })
    return () => {
      stop()
      resize.disconnect()
      plot.destroy()
    }
  }, [store, benchId, channel, spanSeconds, tolerance, hasTimeAxis, light])

  return <div ref={box} role="img" aria-label={text} className="min-w-0 overflow-hidden" />
}

type Drawing = {
  width: number
  height: number
  spanSeconds: number
  hasTimeAxis: boolean
  light: string
  range: () => Range
  windowSeconds: () => number | null
}

function optionsOf({ width, height, spanSeconds, hasTimeAxis, light, range, windowSeconds }: Drawing) {
  const colours = plotColours(light)
  const axis = {
    stroke: colours.soft,
    font: "11px 'Roboto Mono', monospace",
    ticks: { show: false },
    gap: 4,
  }
  return {
    width,
    height,
    padding: [8, 16, hasTimeAxis ? 0 : 8, 0],
    legend: { show: false },
    cursor: { show: false },
    scales: {
      x: { time: false, range: [-spanSeconds, 0] },
      y: { range: (): uPlot.Range.MinMax => [...range()] },
    },
    axes: [
      {
        ...axis,
        show: hasTimeAxis,
        size: timeAxisHeight,
        gap: 7,
        grid: { show: false },
        splits: () => [-spanSeconds, -spanSeconds / 2, 0],
        values: (_, ticks) => ticks.map((t) => (t ? `${-t} s` : 'now')),
      },
      {
        ...axis,
        size: 52,
        space: 20,
        grid: { stroke: colours.rule, width: 1 },
        values: (_, ticks, __, ___, step) => ticks.map((t) => t.toFixed(decimalsOf(step))),
      },
    ],
    series: [{}, { stroke: colours.ink, width: 1.3, points: { show: false }, spanGaps: false }],
    hooks: {
      drawClear: [
        ({ ctx, bbox, valToPos }) => {
          const seconds = windowSeconds()
          if (seconds === null) return
          const left = valToPos(-seconds, 'x', true)
          ctx.fillStyle = colours.rule
          ctx.globalAlpha = 0.45
          ctx.fillRect(left, bbox.top, bbox.left + bbox.width - left, bbox.height)
          ctx.globalAlpha = 1
        },
      ],
    },
  } satisfies uPlot.Options
}

/** As many decimals as the step between two marks needs: 2 for 0.05. */
function decimalsOf(step: number): number {
  const found = [0, 1, 2, 3].find((decimals) => Math.abs(step - Number(step.toFixed(decimals))) < 1e-9)
  return found ?? 4
}
