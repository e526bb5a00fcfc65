import { href, useFetcher } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import type { AnalysisView } from '#app/runs/analysis-view.ts'
import { fits, fitWords } from '#app/runs/fits.ts'
import { AnswerLine } from '../answer-line.tsx'
import { expandedInElevens, inElevens, percent } from './figures.ts'

/** The result of the run as it is stated, and which fit states it. */
export function Statement({ view }: { view: AnalysisView }) {
  const { stated, run, comparison } = view
  const fetcher = useFetcher<ActionReply>()
  if (!stated) return <NothingStated view={view} />
  return (
    <div className="grid grid-cols-1 gap-2">
      <p className="text-[26px] leading-tight font-bold text-beam sm:text-[32px]">
        {inElevens(stated)} <span className="whitespace-nowrap">× 10¹¹ C/kg</span>
      </p>
      <p className="max-w-prose text-ink-soft">
        {`(${expandedInElevens(stated.value, stated.expandedUncertainty)}) × 10¹¹ C/kg, k = ${stated.coverageFactor.toFixed(1)}, 95 %, by ${stated.words}. `}
        {`What all readings share gives ${percent(stated.commonUncertainty / stated.value)} of e/m, what is each reading's own ${percent(stated.independentUncertainty / stated.value)}.`}
      </p>
      {comparison && <p className="max-w-prose border-l-2 border-ink pl-3">{comparison.sentence}</p>}
      <fetcher.Form
        method="post"
        action={href('/runs/:runId/statement', { runId: run.id })}
        className="flex flex-wrap items-center gap-2 text-[12.5px]"
      >
        <label htmlFor="stated-fit" className="text-ink-soft">
          stated by
        </label>
        <select
          id="stated-fit"
          name="fit"
          key={stated.fit}
          defaultValue={stated.fit}
          className="min-h-8 max-w-full px-2 touch:min-h-12"
        >
          {fits
            .filter((fit) => fit === 'general' || view.fits.some((row) => row.fit === fit))
            .map((fit) => (
              <option key={fit} value={fit}>
                {fitWords[fit]}
              </option>
            ))}
        </select>
        <button type="submit" className="button button-small" disabled={fetcher.state !== 'idle'}>
          State it by this fit
        </button>
        <AnswerLine reply={fetcher.data} className="text-ink-soft" />
      </fetcher.Form>
    </div>
  )
}

/** Why there is no value: nothing to fit, or nothing that explains the readings. */
function NothingStated({ view: { mean, diagnosis, reductions, comparison } }: { view: AnalysisView }) {
  return (
    <div className="grid max-w-prose gap-2">
      <p>
        {diagnosis && mean
          ? `No corrected value is stated, for nothing plausible explains these readings. Their plain mean is ${(mean.value / 1e11).toFixed(3)} × 10¹¹ C/kg, which is no result.`
          : 'No value of e/m is stated yet.'}{' '}
        <span className="text-ink-soft">{reductions.join(' ')}</span>
      </p>
      {comparison && <p className="border-l-2 border-ink pl-3">{comparison.sentence}</p>}
    </div>
  )
}
