import { href, Link } from 'react-router'
import type { ImportPreview, PreviewRow } from '#app/imports/import-view.ts'
import { withUncertainty } from '../figures.ts'
import { LocalTime } from '../local-time.tsx'
import { ImportSection } from './import-section.tsx'

type Props = { preview: ImportPreview; hasChanged: boolean; isStoring: boolean }

/** What would be stored and what not, with the reason beside each, and the button that stores it. */
export function Outcome({ preview, hasChanged, isStoring }: Props) {
  const { problems, goodCount, bad, badCount, rows, before } = preview
  const isReady = problems.length === 0 && goodCount > 0
  return (
    <ImportSection title="What would be stored">
      {problems.length > 0 && (
        <ul role="status" className="grid gap-1">
          {problems.map((problem) => (
            <li key={problem} className="font-medium text-caution">
              {problem}
            </li>
          ))}
        </ul>
      )}
      {rows.length > 0 && <GoodRows rows={rows} more={goodCount - rows.length} />}
      {badCount > 0 && <BadRows bad={bad} count={badCount} />}
      {before.length > 0 && (
        <p className="text-caution">
          You have imported this file before:{' '}
          {before.map(({ runId, at }, i) => (
            <span key={runId}>
              {i > 0 && ', '}
              <Link to={href('/runs/:runId/imported', { runId })} className="link">
                <LocalTime iso={at} parts="date and time" />
              </Link>
            </span>
          ))}
          . It would become another run.
        </p>
      )}
      {hasChanged && (
        <p role="alert" className="font-medium">
          Something was changed since these rows were shown, so nothing was stored. Look at them once more.
        </p>
      )}
      <div className="flex flex-wrap items-center gap-x-4 gap-y-2">
        <button
          type="submit"
          name="intent"
          value="store"
          disabled={!isReady || isStoring}
          className="button button-main max-sm:w-full"
        >
          Import {goodCount} {goodCount === 1 ? 'reading' : 'readings'}
        </button>
        <p className="text-[12.5px] text-ink-soft">
          {isReady ? 'As a run of your own, marked imported.' : 'Nothing can be stored yet.'}{' '}
          {badCount > 0 && `${badCount} ${badCount === 1 ? 'row is' : 'rows are'} left out.`}
        </p>
      </div>
    </ImportSection>
  )
}

const head = 'px-2 py-1.5 font-normal whitespace-nowrap'
const cell = 'px-2 py-1 whitespace-nowrap'
const centimetres = (metres: number) => metres * 100

function GoodRows({ rows, more }: { rows: PreviewRow[]; more: number }) {
  const hasRungs = rows.some(({ rung }) => rung)
  return (
    <div>
      <table className="w-full max-w-xl border-collapse text-right">
        <caption className="sr-only">Rows as they would be stored</caption>
        <thead className="text-ink-soft">
          <tr className="border-b border-rule">
            <th scope="col" className={`${head} pl-0 text-left`}>
              line
            </th>
            <th scope="col" className={head}>
              anode V
            </th>
            <th scope="col" className={head}>
              coils A
            </th>
            <th scope="col" className={head}>
              {hasRungs ? 'rung' : 'd cm'}
            </th>
          </tr>
        </thead>
        <tbody>
          {rows.map(({ line, voltage, current, diameter, rung }) => (
            <tr key={line} className="border-b border-rule">
              <th scope="row" className={`${cell} pl-0 text-left font-normal text-ink-soft`}>
                {line}
              </th>
              <td className={cell}>{withUncertainty(voltage.value, voltage.standardUncertainty)}</td>
              <td className={cell}>{withUncertainty(current.value, current.standardUncertainty)}</td>
              <td className={cell}>
                {rung?.rung ??
                  (diameter &&
                    withUncertainty(centimetres(diameter.value), centimetres(diameter.standardUncertainty)))}
              </td>
            </tr>
          ))}
        </tbody>
      </table>
      {more > 0 && <p className="pt-1 text-[12.5px] text-ink-soft">and {more} more like these</p>}
    </div>
  )
}

function BadRows({ bad, count }: { bad: ImportPreview['bad']; count: number }) {
  return (
    <div className="grid gap-1">
      <h3 className="font-medium text-caution">
        {count} {count === 1 ? 'row cannot' : 'rows cannot'} be used
      </h3>
      <ul>
        {bad.map(({ line, cells, reasons }) => (
          <li
            key={line}
            className="grid gap-x-6 border-b border-rule py-1 sm:grid-cols-[5rem_minmax(0,1fr)_minmax(0,2fr)]"
          >
            <span className="text-ink-soft">line {line}</span>
            <span className="min-w-0 truncate">{cells.filter((text) => text !== '').join(' · ')}</span>
            <span className="min-w-0 wrap-anywhere">{reasons.join('; ')}</span>
          </li>
        ))}
      </ul>
      {count > bad.length && <p className="text-[12.5px] text-ink-soft">and {count - bad.length} more</p>}
    </div>
  )
}
