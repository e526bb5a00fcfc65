import { useState } from 'react'
import type { Trace } from '#app/telemetry/ring-buffer.ts'
import { useBridgeSeconds, useTelemetryStore } from '#app/telemetry/telemetry.tsx'
import { fixed } from '../figures.ts'
import type { Row } from './channel-strips.tsx'

const rowSeconds = 5
const spanSeconds = 60
/** How long ago each row begins. */
const starts = Array.from({ length: spanSeconds / rowSeconds }, (_, i) => i * rowSeconds)

/** The last minute of the strips as numbers: the mean of each five seconds. */
export function LastMinute({ benchId, rows }: { benchId: string; rows: Row[] }) {
  const [isOpen, setOpen] = useState(false)
  return (
    <details onToggle={(event) => setOpen(event.currentTarget.open)} className="py-1 text-[12.5px]">
      <summary className="w-fit cursor-pointer text-ink-soft touch:py-3.5">last minute in numbers</summary>
      {isOpen && <Numbers benchId={benchId} rows={rows} />}
    </details>
  )
}

function Numbers({ benchId, rows }: { benchId: string; rows: Row[] }) {
  const store = useTelemetryStore()
  const now = useBridgeSeconds()
  const columns = rows.map((row) => {
    const trace: Trace = { seconds: [], values: [] }
    if (now !== null) store.ring(benchId).read(row.channel, now, spanSeconds, trace)
    return meansOf(trace)
  })
  return (
    <table className="mt-1 border-collapse text-right">
      <caption className="sr-only">Mean of each five seconds of the last minute</caption>
      <thead>
        <tr className="border-b border-ink text-ink-soft">
          <th scope="col" className="pr-4 text-left font-normal">
            seconds ago
          </th>
          {rows.map((row) => (
            <th key={row.channel} scope="col" className="px-4 font-normal">
              {row.label} {row.unit}
            </th>
          ))}
        </tr>
      </thead>
      <tbody>
        {starts.map((start, i) => (
          <tr key={start} className="border-b border-rule">
            <th scope="row" className="pr-4 text-left font-normal">
              {start}–{start + rowSeconds}
            </th>
            {rows.map((row, column) => (
              <td key={row.channel} className="px-4">
                {fixed(columns[column]?.[i], row.decimals)}
              </td>
            ))}
          </tr>
        ))}
      </tbody>
    </table>
  )
}

function meansOf({ seconds, values }: Trace): (number | null)[] {
  return starts.map((start) => {
    const inSlot = values.filter((value, j): value is number => {
      const ago = -(seconds[j] ?? 0)
      return value !== null && ago >= start && ago < start + rowSeconds
    })
    return inSlot.length ? inSlot.reduce((sum, value) => sum + value, 0) / inSlot.length : null
  })
}
