import type { AnalysisView } from '#app/runs/analysis-view.ts'
import { estimate, inElevens } from './figures.ts'
import { Heads, ScrollTable } from './section.tsx'

const heads = ['reading', 'anode V', 'coils A', 'd mm', 'e/m 10¹¹ C/kg', 'residual', 'leverage', '']
const cell = 'px-2 py-1'

/** The readings of the run, each with its own value of e/m and how it lies to the stated fit. */
export function SeriesTable({ rows, mean }: Pick<AnalysisView, 'rows' | 'mean'>) {
  return (
    <>
      {mean && <p className="max-w-prose text-ink-soft">{meanWords(mean)}</p>}
      <ScrollTable label="Readings of the series">
        <Heads names={heads} />
        <tbody>
          {rows.map((row) => (
            <tr key={row.id} className={`border-b border-rule ${row.leftOut ? 'text-ink-soft' : ''}`}>
              <th scope="row" className="py-1 pr-2 text-left font-normal">
                {row.number}
                {row.polarity === -1 && <span className="text-ink-soft"> −B</span>}
              </th>
              <td className={cell}>{estimate(row.voltage)}</td>
              <td className={cell}>{estimate(row.current)}</td>
              <td className={cell}>
                {row.diameter &&
                  estimate({
                    value: row.diameter.value * 1000,
                    standardUncertainty: row.diameter.standardUncertainty * 1000,
                  })}
              </td>
              <td className={`${cell} ${row.leftOut ? '' : 'text-beam'}`}>
                {row.chargeToMass && inElevens(row.chargeToMass)}
              </td>
              <td className={cell}>{row.residual !== null && signed(row.residual)}</td>
              <td className={cell}>{row.leverage?.toFixed(2)}</td>
              <td className="px-2 py-1 text-left text-[12.5px] whitespace-normal text-ink-soft">
                {row.leftOut ??
                  (row.isFlagged ? 'flagged: far from the fit. Look at its notes; it still counts.' : '')}
              </td>
            </tr>
          ))}
        </tbody>
      </ScrollTable>
    </>
  )
}

const signed = (value: number): string => `${value < 0 ? '−' : '+'}${Math.abs(value).toFixed(1)}`

function meanWords({ value, standardDeviation, count }: NonNullable<AnalysisView['mean']>): string {
  const mean = `Plain mean of ${count === 1 ? 'the one value' : `the ${count} values`}: ${(value / 1e11).toFixed(3)} × 10¹¹ C/kg`
  if (standardDeviation === null) return `${mean}.`
  return `${mean}, standard deviation ${(standardDeviation / 1e11).toFixed(3)}, of the mean ${(standardDeviation / Math.sqrt(count) / 1e11).toFixed(3)}: scatter alone, without what all readings share.`
}
