import { Link } from 'react-router'
import type { AnalysisView } from '#app/runs/analysis-view.ts'
import { lineWords, methodWords } from '#app/runs/fits.ts'
import { estimate, inElevens, probability } from './figures.ts'
import { Heads, ScrollTable } from './section.tsx'

const heads = ['line', 'fitted by', 'e/m 10¹¹ C/kg', 'and', 'χ²', 'ν', 'p', 'R²']
const cell = 'px-2 py-1'

/** Every line by every method, side by side; a press draws it. */
export function FitsTable({ fits, plot }: Pick<AnalysisView, 'fits' | 'plot'>) {
  return (
    <ScrollTable label="Fits side by side">
      <Heads names={heads} />
      <tbody>
        {fits.map(
          ({ fit, line, method, chargeToMass, second, chiSquared, degreesOfFreedom, pValue, rSquared }) => {
            const isDrawn = plot?.line === line && plot.method === method
            return (
              <tr key={fit} className={`border-b border-rule ${isDrawn ? 'font-medium' : ''}`}>
                <th scope="row" className="py-1 pr-2 text-left font-normal">
                  <Link
                    to={`?line=${line}&method=${method}#fits`}
                    preventScrollReset
                    aria-current={isDrawn ? 'true' : undefined}
                    className="link-alone"
                  >
                    {lineWords[line]}
                  </Link>
                </th>
                <td className={`${cell} min-w-44 text-left whitespace-normal`}>{methodWords[method]}</td>
                <td className={`${cell} text-beam`}>{inElevens(chargeToMass)}</td>
                <td className={cell}>{second && `${second.name} ${estimate(second)} ${second.unit}`}</td>
                <td className={cell}>{chiSquared.toPrecision(3)}</td>
                <td className={cell}>{degreesOfFreedom}</td>
                <td className={cell}>{probability(pValue)}</td>
                <td className={cell}>{rSquared.toFixed(4)}</td>
              </tr>
            )
          },
        )}
      </tbody>
    </ScrollTable>
  )
}
