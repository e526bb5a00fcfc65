import type { TypedBenchView } from '#app/benches/bench-view.server.ts'
import { formatConcise, formatExpanded, formatFixed } from '#app/metrology/format.ts'
import { sharesSentence } from './live-reading.ts'
import { oldestFirst } from './logbook-rows.ts'

const exponent = 11

/** e/m of the newest reading that has one, in ink where the tube alone may glow. */
export function TypedResult({ view }: { view: TypedBenchView }) {
  const reading = oldestFirst(view.readings).findLast(({ struck, result }) => !struck && result)
  if (!reading?.result)
    return (
      <section aria-label="e/m">
        <p className="text-ink-soft">e/m</p>
        <p>Type a reading and read its diameter; then it stands here.</p>
      </section>
    )
  const { chargeToMass, standardUncertainty, expandedUncertainty, coverageFactor, groups } = reading.result
  const [, plusMinus] = formatExpanded(chargeToMass, expandedUncertainty, { exponent }).split(' ± ')
  return (
    <section aria-label="e/m" className="@container min-w-0">
      <p className="text-ink-soft">e/m of reading {reading.number}</p>
      <p className="text-[clamp(20px,7cqi,40px)] leading-tight font-bold tracking-tighter whitespace-nowrap text-beam dark:text-ink">
        {formatConcise(chargeToMass, standardUncertainty, { exponent })} × 10¹¹ C/kg
      </p>
      <p className="text-ink-soft">
        ± {plusMinus} at 95 %, k = {formatFixed(coverageFactor, 1)}.{' '}
        {sharesSentence(groups).replaceAll(' %', '\u00a0%')}
      </p>
    </section>
  )
}
