import type { BudgetBench } from '#app/analysis/reading.ts'
import type { BenchView } from '#app/benches/bench-view.server.ts'
import { readingBench } from '#app/benches/reading-bench.ts'
import { formatConcise, formatExpanded, formatFixed } from '#app/metrology/format.ts'
import type { BenchConfig } from '#app/protocol/bench-config.ts'
import type { BenchState } from '#app/protocol/messages.ts'
import { useLink } from '#app/telemetry/telemetry.tsx'
import { liveReading, sharesSentence } from './live-reading.ts'

const benches = new Map<string, BudgetBench>()

/** One object a revision, since what is tabulated for a bench is kept with its object. */
function benchOf(config: BenchConfig): BudgetBench {
  const key = `${config.benchId}/${config.revision}`
  const bench = benches.get(key) ?? readingBench(config)
  benches.set(key, bench)
  return bench
}

const exponent = 11

/** '± 0.042', in the same unit as the value above it. */
function plusMinus(value: number, expandedUncertainty: number): string {
  return `± ${formatExpanded(value, expandedUncertainty, { exponent }).split(' ± ')[1]}`
}

/** e/m as it stands now, its standard uncertainty in parentheses, the expanded one below, and what gives how much of it. */
export function LiveResult({ view, state }: { view: BenchView; state: BenchState | null }) {
  const { config } = view.bench
  const isLinked = useLink().kind === 'connected'
  const isVirtual = config.picturePath !== null
  const live =
    state &&
    liveReading({ readings: view.readings, state, bench: benchOf(config), revision: config.revision })
  if (!live || !isLinked) return <NoResult sentence="Waiting for the bridge." />
  if (live.kind === 'none') return <NoResult sentence={live.sentence} />
  const { value, standardUncertainty, expandedUncertainty, coverageFactor, groups } = live.result
  return (
    <section aria-label="e/m" className="@container min-w-0">
      <p className="text-ink-soft">
        e/m, with the {live.source} of reading {live.number}
      </p>
      {/* On a real bench in a dark room the tube alone may glow. */}
      <p
        className={`text-[clamp(20px,7cqi,40px)] leading-tight whitespace-nowrap font-bold tracking-tighter text-beam ${isVirtual ? '' : 'dark:text-ink'}`}
      >
        {formatConcise(value, standardUncertainty, { exponent })} × 10¹¹ C/kg
      </p>
      <p className="text-ink-soft">
        {plusMinus(value, expandedUncertainty)} at 95 %, k = {formatFixed(coverageFactor, 1)}.{' '}
        {sharesSentence(groups).replaceAll(' %', '\u00a0%')}
      </p>
    </section>
  )
}

function NoResult({ sentence }: { sentence: string }) {
  return (
    <section aria-label="e/m">
      <p className="text-ink-soft">e/m</p>
      <p>{sentence}</p>
    </section>
  )
}
