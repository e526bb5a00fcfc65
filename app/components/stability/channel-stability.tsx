import { useState } from 'react'
import { judgeStability, leastSamples, newestStretch, type Stability } from '#app/analysis/stability.ts'
import { AllanPlot } from '#app/charts/static/allan-plot.tsx'
import type { Channel } from '#app/safety/types.ts'
import type { AllanPoint } from '#app/statistics/allan.ts'
import type { Trace } from '#app/telemetry/ring-buffer.ts'
import { useTelemetryStore } from '#app/telemetry/telemetry.tsx'
import { stabilitySentences, type Taken, withPrefix } from './stability-words.ts'

const choices: { channel: Channel; label: string; unit: string }[] = [
  { channel: 'anodeVolts', label: 'anode voltage, by its meter', unit: 'V' },
  { channel: 'coilAmps', label: 'coil current, by its meter', unit: 'A' },
  { channel: 'heaterVolts', label: 'heater voltage', unit: 'V' },
  { channel: 'anodeAmps', label: 'anode current', unit: 'A' },
  { channel: 'coilCelsius', label: 'coil temperature', unit: '°C' },
]
const longestSeconds = 600

/** Takes what this page has of a channel, up to ten minutes, and says how long it is best averaged and whether it drifts. */
export function ChannelStability({ benchId }: { benchId: string }) {
  const store = useTelemetryStore()
  const [channel, setChannel] = useState<Channel>('anodeVolts')
  const [taken, setTaken] = useState<(Taken & { channel: Channel }) | null>(null)

  function take() {
    const choice = choices.find((it) => it.channel === channel)
    if (!choice) return
    const ring = store.ring(benchId)
    const trace: Trace = { seconds: [], values: [] }
    ring.read(channel, ring.newestSeconds ?? 0, longestSeconds, trace)
    const stretch = newestStretch(trace)
    const samples = stretch.values.length
    setTaken({
      ...choice,
      samples,
      endedAgo: -(stretch.endSeconds ?? 0),
      seconds: samples * stretch.intervalSeconds,
      stability: samples >= leastSamples ? judgeStability(stretch) : null,
    })
  }

  return (
    <div className="grid grid-cols-1 gap-3">
      <div className="flex flex-wrap items-end gap-3">
        <label className="grid gap-1">
          <span className="text-[12.5px] text-ink-soft">channel</span>
          <select
            value={channel}
            onChange={(event) => setChannel(event.target.value as Channel)}
            className="min-h-9 px-2 touch:min-h-12"
          >
            {choices.map((it) => (
              <option key={it.channel} value={it.channel}>
                {it.label}
              </option>
            ))}
          </select>
        </label>
        <button type="button" className="button" onClick={take}>
          Take what is recorded
        </button>
      </div>
      <div role="status" className="grid max-w-prose gap-1">
        {taken && stabilitySentences(taken).map((sentence) => <p key={sentence}>{sentence}</p>)}
      </div>
      {taken?.stability && taken.stability.best.deviation > 0 && (
        <Curve benchId={benchId} taken={taken} {...taken.stability} />
      )}
    </div>
  )
}

type CurveProps = Pick<Stability, 'curve' | 'best'> & { benchId: string; taken: Taken & { channel: Channel } }

function Curve({ benchId, taken, curve, best }: CurveProps) {
  const { unit, factor } = withPrefix(Math.max(...curve.map(({ deviation }) => deviation)), taken.unit)
  const inUnit = (point: AllanPoint) => ({
    ...point,
    deviation: point.deviation * factor,
    standardUncertainty: point.standardUncertainty * factor,
  })
  const points = curve.map(inUnit)
  return (
    <AllanPlot
      points={points}
      best={points[curve.indexOf(best)] ?? inUnit(best)}
      unit={unit}
      caption={`Overlapping Allan deviation of the ${taken.label}, ${taken.samples} samples (NIST SP 1065). Bars are rough standard uncertainties.`}
      fileName={`allan-${benchId}-${taken.channel}`}
    />
  )
}
