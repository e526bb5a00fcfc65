import type { BenchView, TypedBenchView } from '#app/benches/bench-view.server.ts'
import { LogbookRow } from './logbook-row.tsx'
import { oldestFirst, readingToRead } from './logbook-rows.ts'

const headings = ['anode V', 'coils A', 'left cm', 'right cm', 'd cm', 'e/m 10¹¹ C/kg']
const rungHeadings = ['anode V', 'coils A', 'rung', 'moved ± A', 'd cm', 'e/m 10¹¹ C/kg']

/** The readings of the run, growing downward like a page of a logbook. */
export function Logbook({ view }: { view: BenchView | TypedBenchView }) {
  const { scale, instruments } = view.bench.config
  const current = readingToRead(view.readings)
  if (view.readings.length === 0)
    return (
      <p className="border-t border-ink py-3 text-ink-soft">
        No readings in this run yet.{' '}
        {instruments
          ? 'When anode and coils are settled, capture takes the first one.'
          : 'What the meters show, typed above, becomes the first one.'}
      </p>
    )
  return (
    <section aria-label="Readings" className="@container relative">
      <table className="w-full border-collapse stacked:block">
        <caption className="sr-only">Readings of this run</caption>
        <thead className="stacked:sr-only">
          <tr className="border-b border-ink text-right whitespace-nowrap text-ink-soft">
            <th scope="col" className="py-1.5 pr-3 text-left font-normal">
              Reading
            </th>
            {(scale.kind === 'rungs' ? rungHeadings : headings).map((heading) => (
              <th key={heading} scope="col" className="px-2 py-1.5 font-normal">
                {heading}
              </th>
            ))}
            <th scope="col" className="px-3 text-left font-normal">
              <span className="sr-only">Remarks</span>
            </th>
          </tr>
        </thead>
        <tbody className="stacked:block stacked:border-t stacked:border-ink">
          {oldestFirst(view.readings).map((reading) => (
            <LogbookRow
              key={reading.id}
              view={view}
              reading={reading}
              isCurrent={reading.id === current?.id}
            />
          ))}
        </tbody>
      </table>
    </section>
  )
}
