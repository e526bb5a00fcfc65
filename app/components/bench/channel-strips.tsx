import { LiveStrip } from '#app/charts/live-strip.tsx'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import type { BenchState } from '#app/protocol/messages.ts'
import type { Channel } from '#app/safety/types.ts'
import { useDroppedSamples, useLatest, useLink } from '#app/telemetry/telemetry.tsx'
import { fixed } from '../figures.ts'
import { Quantity } from '../quantity.tsx'
import { LastMinute } from './last-minute.tsx'

export type Row = { channel: Channel; label: string; unit: string; decimals: number; leastRange: number }

const spanSeconds = 60

/** The channels that a reading rests on: figure, last minute, and whether each is settled and why not. */
export function ChannelStrips({ config, state }: { config: BenchConfig; state: BenchState | null }) {
  const dropped = useDroppedSamples()
  const rows: Row[] = [
    {
      channel: 'anodeVolts',
      label: 'anode',
      unit: 'V',
      decimals: 2,
      leastRange: config.tolerance.anodeVolts * 8,
    },
    {
      channel: 'coilAmps',
      label: 'coils',
      unit: 'A',
      decimals: 3,
      leastRange: config.tolerance.coilAmps * 8,
    },
    {
      channel: 'coilCelsius',
      label: 'coil temp',
      unit: '°C',
      decimals: 1,
      leastRange: config.tolerance.coilCelsius * 4,
    },
  ]
  return (
    <div>
      {rows.map((row) => (
        <Strip key={row.channel} row={row} config={config} state={state} />
      ))}
      {dropped > 0 && (
        <p className="pt-1 text-[12.5px] text-caution">
          {dropped} samples are not drawn: this page could not keep up. Nothing is missing from a capture.
        </p>
      )}
      <LastMinute benchId={config.benchId} rows={rows} />
    </div>
  )
}

function Strip({ row, config, state }: { row: Row; config: BenchConfig; state: BenchState | null }) {
  const latest = useLatest(config.benchId, row.channel)
  const isLive = useLink().kind === 'connected'
  const status = isLive ? state?.channels[row.channel] : undefined
  const word = status?.state ?? 'stale'
  const reason = status?.reason ?? (isLive ? 'no reading yet' : 'no link to the bridge')
  return (
    <div className="grid grid-cols-[1fr_auto] items-center gap-x-4 gap-y-1 border-b border-rule py-2 md:grid-cols-[140px_minmax(0,1fr)_150px]">
      <Quantity
        value={latest?.value}
        unit={row.unit}
        decimals={row.decimals}
        className="text-right text-[21px] font-bold tracking-tight text-live max-md:text-left"
        unitClassName="inline-block w-[3ch] text-left text-[13px] font-normal"
      />
      <div className="max-md:order-last max-md:col-span-2">
        <LiveStrip
          benchId={config.benchId}
          channel={row.channel}
          spanSeconds={spanSeconds}
          windowSeconds={word === 'settled' ? config.window.seconds : null}
          leastRange={row.leastRange}
          text={`${row.label} over the last minute: now ${fixed(latest?.value, row.decimals)} ${row.unit}, ${word}, ${reason}`}
        />
      </div>
      <div className="text-[12.5px] leading-snug">
        <span className="block text-ink-soft max-md:inline">{row.label} </span>
        <b className="block font-medium max-md:inline" data-channel-state={row.channel}>
          {word}
        </b>
        <span className="block text-ink-soft">{reason}</span>
      </div>
    </div>
  )
}
