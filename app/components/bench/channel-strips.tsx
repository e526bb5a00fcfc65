import { href, Link } from 'react-router'
import { LiveStrip } from '#app/charts/live-strip.tsx'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import type { BenchState } from '#app/protocol/messages.ts'
import type { Channel } from '#app/safety/types.ts'
import { useDroppedSamples, useLatest, useLink } from '#app/telemetry/telemetry.tsx'
import { fixed } from '../figures.ts'
import { Quantity } from '../quantity.tsx'
import { LastMinute } from './last-minute.tsx'

export type Row = { channel: Channel; label: string; unit: string; decimals: number; tolerance: number }

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
      tolerance: config.tolerance.anodeVolts,
    },
    {
      channel: 'coilAmps',
      label: 'coils',
      unit: 'A',
      decimals: 3,
      tolerance: config.tolerance.coilAmps,
    },
    {
      channel: 'coilCelsius',
      label: 'coil temp',
      unit: '°C',
      decimals: 1,
      tolerance: config.tolerance.coilCelsius,
    },
  ]
  return (
    <div>
      {rows.map((row, index) => (
        <Strip
          key={row.channel}
          row={row}
          config={config}
          state={state}
          hasTimeAxis={index === rows.length - 1}
        />
      ))}
      {dropped > 0 && (
        <p className="pt-1 text-[12.5px] text-caution">
          {dropped} samples are not drawn: this page could not keep up. Nothing is missing from a capture.
        </p>
      )}
      <div className="flex flex-wrap items-start justify-between gap-x-5">
        <LastMinute benchId={config.benchId} rows={rows} />
        <Link
          to={href('/benches/:benchId/stability', { benchId: config.benchId })}
          className="link-alone py-1 text-[12.5px] text-ink-soft"
        >
          stability
        </Link>
      </div>
    </div>
  )
}

type StripProps = { row: Row; config: BenchConfig; state: BenchState | null; hasTimeAxis: boolean }

function Strip({ row, config, state, hasTimeAxis }: StripProps) {
  const latest = useLatest(config.benchId, row.channel)
  const isLive = useLink().kind === 'connected'
  const status = isLive ? state?.channels[row.channel] : undefined
  const word = status?.state ?? 'stale'
  const isSteady = word === 'settled' || word === 'drifting' || word === 'noisy'
  const reason = status?.reason ?? (isLive ? 'no reading yet' : 'no link to the bridge')
  return (
    <div className="grid grid-cols-[1fr_auto] items-center gap-x-4 gap-y-1 border-b border-rule py-1.5 md:grid-cols-[130px_minmax(0,1fr)_140px] xl:grid-cols-[120px_minmax(0,1fr)_200px]">
      <Quantity
        value={word === 'stale' ? null : latest?.value}
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
          steadySeconds={isSteady ? config.window.seconds : null}
          tolerance={row.tolerance}
          hasTimeAxis={hasTimeAxis}
          text={`${row.label} over the last minute: now ${fixed(latest?.value, row.decimals)} ${row.unit}, ${word}, ${reason}`}
        />
      </div>
      <div className="text-[12.5px] leading-snug max-md:text-right md:min-h-16">
        <span className="block text-ink-soft max-md:inline">{row.label} </span>
        <b className="block font-medium max-md:inline" data-channel-state={row.channel}>
          {word}
        </b>
        <span className="block text-ink-soft">{reason}</span>
      </div>
    </div>
  )
}
