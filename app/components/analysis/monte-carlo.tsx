import { useEffect, useRef, useState } from 'react'
import { Histogram } from '#app/charts/static/histogram.tsx'
import type { MonteCarloProblem, MonteCarloReport } from '#app/runs/monte-carlo.ts'
import { startMonteCarlo } from '#app/runs/monte-carlo-client.ts'
import { expandedInElevens, inElevens } from './figures.ts'

type Report = Exclude<MonteCarloReport, { type: 'refused' }>

/** Draws every input from its distribution and works e/m out, again and again, until the figures stand. */
export function MonteCarlo({ problem, runNumber }: { problem: MonteCarloProblem; runNumber: string }) {
  const [report, setReport] = useState<MonteCarloReport | null>(null)
  const running = useRef<ReturnType<typeof startMonteCarlo> | null>(null)
  useEffect(() => () => running.current?.close(), [])
  const isRunning = report?.type === 'progress'

  function start() {
    running.current?.close()
    setReport(null)
    running.current = startMonteCarlo({ problem, seed: 1 }, setReport)
  }

  return (
    <div className="grid max-w-prose gap-2">
      <p className="text-ink-soft">
        The budget above is worked out to first order. Here every input of the readings is drawn from its own
        distribution and their mean e/m worked out, as if there were no stray field and no offset, until mean,
        uncertainty and interval stand to two digits (JCGM 101).
      </p>
      <div className="flex flex-wrap items-center gap-3">
        <button type="button" className="button" onClick={start} disabled={isRunning}>
          {report ? 'Draw again' : 'Draw'}
        </button>
        {isRunning && (
          <button type="button" className="button" onClick={() => running.current?.stop()}>
            Stop
          </button>
        )}
        <span role="status" className="text-[12.5px] text-ink-soft">
          {report ? statusOf(report) : ''}
        </span>
      </div>
      {report && report.type !== 'refused' && <Outcome report={report} runNumber={runNumber} />}
    </div>
  )
}

function statusOf(report: MonteCarloReport): string {
  if (report.type === 'refused') return `Nothing can be drawn: ${report.reason}.`
  if (report.type === 'progress') return `${report.samples.toLocaleString('en')} drawn`
  const { samples, isStable } = report.result
  return `${samples.toLocaleString('en')} drawn${isStable === false ? ', stopped before the figures stood' : ''}`
}

function Outcome({ report, runNumber }: { report: Report; runNumber: string }) {
  const { mean, standardUncertainty, histogram } = report.type === 'done' ? report.result : report
  const interval = report.type === 'done' ? report.result.shortestInterval : null
  const { low, high, counts } = histogram
  const width = (high - low) / counts.length
  const elevens = (value: number) => value / 1e11
  return (
    <>
      <Histogram
        bounds={Array.from({ length: counts.length + 1 }, (_, bin) => elevens(low + bin * width))}
        counts={counts}
        interval={interval && [elevens(interval[0]), elevens(interval[1])]}
        label="e/m, 10¹¹ C/kg"
        caption={
          interval
            ? `Mean of the readings' e/m as drawn: ${inElevens({ value: mean, standardUncertainty })} × 10¹¹ C/kg. The dashed lines hold 95 % of the draws, from ${elevens(interval[0]).toFixed(3)} to ${elevens(interval[1]).toFixed(3)}.`
            : 'Drawing.'
        }
        fileName={`monte-carlo-${runNumber}`}
      />
      {report.type === 'done' && (
        <p>
          {report.check.agrees
            ? 'It agrees with the first-order budget: '
            : 'It does not agree with the first-order budget, which is then not to be trusted: '}
          <span className="text-ink-soft">
            {`to first order (${expandedInElevens(report.firstOrder.value, report.firstOrder.expandedUncertainty)}) × 10¹¹ C/kg, k = ${report.firstOrder.coverageFactor.toFixed(1)}.`}
          </span>
        </p>
      )}
    </>
  )
}
