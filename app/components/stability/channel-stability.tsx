import { useState } from 'react'
import { judgeStability, leastSamples, newestStretch, type Stability } from '#app/analysis/stability.ts'
import { AllanPlot } from '#app/charts/static/allan-plot.tsx'
import type { Channel } from '#app/safety/types.ts'
import type { Trace } from '#app/telemetry/ring-buffer.ts'
import { useTelemetryStore } from '#app/telemetry/telemetry.tsx'

const choices: { channel: Channel; label: string; unit: string }[] = [
  { channel: 'anodeVolts', label: 'anode voltage, by its meter', unit: 'V' },
  { channel: 'coilAmps', label: 'coil current, by its meter', unit: 'A' },
  { channel: 'heaterVolts', label: 'heater voltage', unit: 'V' },
  { channel: 'anodeAmps', label: 'anode current', unit: 'A' },
  { channel: 'coilCelsius', label: 'coil temperature', unit: '°C' },
]
const longestSeconds = 600

type Taken = {
  choice: (typeof choices)[number]
  seconds: number
  samples: number
  stability: Stability | null
}

/** Takes what this page has of a channel, up to ten minutes, and says how long it is best averaged and whether it drifts. */
export function ChannelStability({ benchId }: { benchId: string }) {
  const store = useTelemetryStore()
  const [channel, setChannel] = useState<Channel>('anodeVolts')
  const [taken, setTaken] = useState<Taken | null>(null)

  function take() {
    const choice = choices.find((it) => it.channel === channel)
    if (!choice) return
    const ring = store.ring(benchId)
    const trace: Trace = { seconds: [], values: [] }
    ring.read(channel, ring.newestSeconds ?? 0, longestSeconds, trace)
    const stretch = newestStretch(trace)
    const samples = stretch.values.length
    setTaken({
      choice,
      samples,
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
        {taken && sentencesOf(taken).map((sentence) => <p key={sentence}>{sentence}</p>)}
      </div>
      {taken?.stability && taken.stability.best.deviation > 0 && (
        <AllanPlot
          points={taken.stability.curve}
          best={taken.stability.best}
          unit={taken.choice.unit}
          caption={`Overlapping Allan deviation of the ${taken.choice.label}, ${taken.samples} samples (NIST SP 1065). Bars are rough standard uncertainties.`}
          fileName={`allan-${benchId}-${taken.choice.channel}`}
        />
      )}
    </div>
  )
}

function sentencesOf({ choice, seconds, samples, stability }: Taken): string[] {
  if (!stability) {
    const wait = samples > 1 ? Math.ceil(((leastSamples - samples) * seconds) / samples) : null
    return [
      `There are ${samples} samples without a gap, and at least ${leastSamples} are needed${wait ? `: wait ${wait} s more` : ''}.`,
    ]
  }
  const { best, driftFromSeconds, slopePerMinute, trend } = stability
  const size = (value: number) => `${Number(value.toPrecision(2))} ${choice.unit}`
  const taken = `${seconds.toFixed(0)} s of the ${choice.label}, ${samples} samples.`
  if (best.deviation === 0)
    return [taken, 'Its last digit does not move: the resolution of the meter is all there is.']
  return [
    `${taken} It is steadiest averaged over ${Number(best.seconds.toPrecision(2))} s: two such means differ by about ${size(best.deviation * Math.SQRT2)}.`,
    driftFromSeconds === null
      ? 'Within this record more averaging does no harm.'
      : `Averaged over ${Number(driftFromSeconds.toPrecision(2))} s or longer, drift takes over.`,
    trend.p < 0.01
      ? `It ${slopePerMinute > 0 ? 'rises' : 'falls'} by ${size(Math.abs(slopePerMinute))} a minute (p = ${trend.p < 0.0001 ? 'below 0.0001' : trend.p.toFixed(4)}).`
      : `No trend is told from chance (p = ${trend.p.toFixed(2)}).`,
  ]
}
