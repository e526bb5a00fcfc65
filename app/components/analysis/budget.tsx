import type { BudgetRow } from '#app/runs/analysis-view.ts'
import { percent } from './figures.ts'
import { Heads, ScrollTable } from './section.tsx'

/** What gives how much of the uncertainty: what all readings share apart from what is each reading's own. */
export function Budget({ rows }: { rows: BudgetRow[] }) {
  const largest = Math.max(...rows.map(({ relative }) => relative), 0)
  return (
    <div className="grid grid-cols-1 gap-3">
      {[true, false].map((isCommon) => {
        const part = rows.filter((row) => row.isCommon === isCommon).sort((a, b) => b.relative - a.relative)
        if (part.length === 0) return null
        const total = Math.hypot(...part.map(({ relative }) => relative))
        return (
          <div key={String(isCommon)} className="grid grid-cols-1 gap-1">
            <h3 className="font-medium">
              {isCommon ? 'Shared by all readings' : "Each reading's own"}{' '}
              <span className="font-normal text-ink-soft">
                {percent(total)} of e/m together
                {isCommon ? ': more readings do not make it smaller' : ': more readings make it smaller'}
              </span>
            </h3>
            <ScrollTable label={isCommon ? 'Shared by all readings' : "Each reading's own"}>
              <Heads names={['line', 'of e/m', 'of the variance', '']} />
              <tbody>
                {part.map((row) => (
                  <tr key={row.name} className="border-b border-rule">
                    <th scope="row" className="py-1 pr-2 text-left font-normal">
                      {row.name}
                    </th>
                    <td className="px-2 py-1">{percent(row.relative)}</td>
                    <td className="px-2 py-1">{percent(row.share)}</td>
                    <td className="w-1/2 min-w-24 px-2 py-1">
                      <span
                        aria-hidden="true"
                        className={`block h-3 ${isCommon ? 'bg-ink' : 'bg-edge'}`}
                        style={{ width: `${largest > 0 ? (row.relative / largest) * 100 : 0}%` }}
                      />
                    </td>
                  </tr>
                ))}
              </tbody>
            </ScrollTable>
          </div>
        )
      })}
    </div>
  )
}
