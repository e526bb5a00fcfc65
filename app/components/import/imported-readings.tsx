import { href } from 'react-router'
import type { ImportedRunView } from '#app/imports/imported-run.server.ts'
import { StrikeReading } from '../bench/strike-reading.tsx'
import { fixed, withUncertainty } from '../figures.ts'

type Row = ImportedRunView['readings'][number]

const named =
  'stacked:p-0 stacked:text-left stacked:empty:hidden stacked:before:inline-block stacked:before:w-full stacked:before:text-[12.5px] stacked:before:text-ink-soft stacked:before:content-[attr(data-name)]'
const centimetres = (metres: number) => fixed(metres * 100, 2)

/** The readings of an imported run, as a logbook shows them. */
export function ImportedReadings({ view }: { view: ImportedRunView }) {
  const { readings } = view
  const hasRungs = readings.some(({ rung }) => rung)
  const hasEdges = readings.some(
    ({ stated }) => stated?.leftMetres !== null && stated?.leftMetres !== undefined,
  )
  const middle = hasRungs ? ['rung', 'moved ± A'] : hasEdges ? ['left cm', 'right cm'] : []
  return (
    <section aria-label="Readings" className="@container">
      <table className="w-full border-collapse stacked:block">
        <caption className="sr-only">Readings of this run</caption>
        <thead className="stacked:sr-only">
          <tr className="border-b border-ink text-right whitespace-nowrap text-ink-soft">
            <th scope="col" className="py-1.5 pr-3 text-left font-normal">
              Reading
            </th>
            {['anode V', 'coils A', ...middle, 'd cm', 'e/m 10¹¹ C/kg'].map((heading) => (
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
          {readings.map((reading) => (
            <ReadingRow key={reading.id} view={view} reading={reading} middle={middle} />
          ))}
        </tbody>
      </table>
    </section>
  )
}

function ReadingRow({ view, reading, middle }: { view: ImportedRunView; reading: Row; middle: string[] }) {
  const { number, polarity, struck, result } = reading
  const line = struck ? 'line-through' : ''
  const cell = `px-2 py-1.5 ${named} ${line}`
  const diameter = result?.diameterMetres ?? reading.stated?.diameterMetres ?? null
  return (
    <tr
      className={`border-b border-rule text-right whitespace-nowrap stacked:grid stacked:grid-cols-2 stacked:gap-x-3 stacked:gap-y-1.5 stacked:py-2 stacked:whitespace-normal ${struck ? 'text-ink-soft' : ''}`}
    >
      <th
        scope="row"
        className={`py-1.5 pr-3 text-left font-normal stacked:col-span-2 stacked:p-0 stacked:font-medium stacked:before:content-['Reading_'] ${line}`}
      >
        {number}
        {polarity === -1 && <span className="text-ink-soft"> −B</span>}
      </th>
      <td className={cell} data-name="anode V">
        {withUncertainty(reading.anodeVolts, reading.uAnodeVolts)}
      </td>
      <td className={cell} data-name="coils A">
        {withUncertainty(reading.coilAmps, reading.uCoilAmps)}
      </td>
      {middle.map((heading) => (
        <td key={heading} className={cell} data-name={heading}>
          {readOf(reading, heading)}
        </td>
      ))}
      <td className={cell} data-name="d cm">
        {diameter !== null && centimetres(diameter)}
      </td>
      <td className={`${cell} ${struck ? '' : 'text-beam dark:text-ink'}`} data-name="e/m 10¹¹ C/kg">
        {result && withUncertainty(result.chargeToMass / 1e11, result.standardUncertainty / 1e11)}
      </td>
      <td className="px-3 py-1.5 text-left whitespace-normal stacked:col-span-2 stacked:p-0">
        <span className="flex flex-wrap items-center gap-x-3 gap-y-1 text-ink-soft">
          <span>imported</span>
          {struck && (
            <span>
              struck by {struck.by}: {struck.reason}
            </span>
          )}
          {!struck && view.mayStrike && (
            <StrikeReading
              action={href('/runs/:runId/imported', { runId: view.run.id })}
              readingId={reading.id}
              number={number}
            />
          )}
        </span>
      </td>
    </tr>
  )
}

/** What stands below a heading between the current and the diameter. */
function readOf({ rung, stated }: Row, heading: string): string | null {
  if (heading === 'rung') return rung?.rung ?? null
  if (heading === 'moved ± A') return rung && fixed(rung.settingHalfWidthAmps, 3)
  const metres = heading === 'left cm' ? stated?.leftMetres : stated?.rightMetres
  return metres === null || metres === undefined ? null : centimetres(metres)
}
