import { useEffect, useRef } from 'react'
import uPlot from 'uplot'
import 'uplot/dist/uPlot.min.css'
import type { Channel } from '#app/safety/types.ts'
import type { Trace } from '#app/telemetry/ring-buffer.ts'
import { useTelemetryStore } from '#app/telemetry/telemetry.tsx'
import { drawEachFrame } from './frame-loop.ts'
import { plotColours, useRoomLight } from './theme.ts'

type Props = {
  benchId: string
  channel: Channel
  /** Seconds shown, the newest at the right. */
  spanSeconds: number
  /** Length of the settled window in seconds, shaded at the right; null shades nothing. */
  windowSeconds: number | null
  /** The narrowest range of values drawn, so that noise does not fill the strip. */
  leastRange: number
  /** What the strip shows, in words, for whoever does not see it. */
  text: string
}

const height = 78
const minimumSeconds = 1 / 30

/** One channel over time, drawn from the ring buffer outside React. */
export function LiveStrip({ benchId, channel, spanSeconds, windowSeconds, leastRange, text }: Props) {
  const box = useRef<HTMLDivElement>(null)
  const shaded = useRef(windowSeconds)
  const store = useTelemetryStore()
  const light = useRoomLight()
  useEffect(() => {
    shaded.current = windowSeconds
  }, [windowSeconds])

  useEffect(() => {
    const element = box.current
    if (!element) return
    const colours = plotColours(light)
    const font = "11px 'Roboto Mono', monospace"
    const axis = { stroke: colours.soft, font, ticks: { show: false }, gap: 4 }
    const plot = new uPlot(
      {
        width: element.clientWidth,
        height,
        padding: [8, 16, 2, 0],
        legend: { show: false },
        cursor: { show: false },
        scales: {
          x: { time: false, range: [-spanSeconds, 0] },
          y: { range: (_, low, high) => widen(low, high, leastRange) },
        },
        axes: [
          {
            ...axis,
            size: 24,
            gap: 8,
            space: 90,
            grid: { show: false },
            values: (_, ticks) => ticks.map((t) => (t ? `${-t} s` : 'now')),
          },
          { ...axis, size: 46, space: 22, grid: { stroke: colours.rule, width: 1 } },
        ],
        series: [{}, { stroke: colours.ink, width: 1.3, points: { show: false }, spanGaps: false }],
        hooks: {
          drawClear: [
            ({ ctx, bbox, valToPos }) => {
              if (shaded.current === null) return
              const left = valToPos(-shaded.current, 'x', true)
              ctx.fillStyle = colours.rule
              ctx.globalAlpha = 0.45
              ctx.fillRect(left, bbox.top, bbox.left + bbox.width - left, bbox.height)
              ctx.globalAlpha = 1
            },
          ],
        },
      },
      [[], []],
      element,
    )
    const resize = new ResizeObserver(() => plot.setSize({ width: element.clientWidth, height }))
    resize.observe(element)
    const trace: Trace = { seconds: [], values: [] }
    let drawn = 0
    const stop = drawEachFrame(() => {
      const now = store.bridgeSeconds()
      if (now - drawn < minimumSeconds) return
      drawn = now
      store.ring(benchId).read(channel, now, spanSeconds, trace)
      plot.setData([trace.seconds, trace.values])
    })
    return () => {
      stop()
      resize.disconnect()
      plot.destroy()
    }
  }, [store, benchId, channel, spanSeconds, leastRange, light])

  return <div ref={box} role="img" aria-label={text} className="min-w-0 overflow-hidden" />
}

function widen(low: number | null, high: number | null, least: number): [number, number] {
  if (low === null || high === null || !Number.isFinite(low) || !Number.isFinite(high)) return [0, least]
  const middle = (low + high) / 2
  const half = Math.max((high - low) * 0.55, least / 2)
  return [middle - half, middle + half]
}
