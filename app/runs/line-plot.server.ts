import { fitSeriesLine, linePoints } from '../analysis/series-lines.ts'
import type { SeriesField, SeriesReading } from '../analysis/series-model.ts'
import { studentQuantile } from '../statistics/distributions.ts'
import type { AnalysisView } from './analysis-view.ts'
import { type LineKind, lineWords, type Method, methodWords } from './fits.ts'

const places = 41

type Drawn = {
  points: readonly SeriesReading[]
  /** of the readings, as the run numbers them */
  numbers: readonly number[]
  field: SeriesField
  line: LineKind
  method: Method
  outliers: readonly { index: number }[]
}

/** The readings as points of a line with the line through them, in units that a reader can use; null without a line. */
export function linePlot({ points, numbers, field, line, method, outliers }: Drawn): AnalysisView['plot'] {
  try {
    const { fit } = fitSeriesLine(points, field, { line, method })
    if (!(fit.degreesOfFreedom > 0)) return null
    const { x, y, xScale, yScale } = axes[line]
    const marks = linePoints(points, field, line)
    const across = marks.flatMap((mark) => [mark.x - mark.ux, mark.x + mark.ux])
    const [low, high] = [Math.min(...across), Math.max(...across)]
    const air = (high - low) * 0.06
    const factor = studentQuantile(
      0.975,
      fit.pValue === null ? fit.degreesOfFreedom : Number.POSITIVE_INFINITY,
    )
    return {
      line,
      method,
      x,
      y,
      points: marks.map((mark, i) => ({
        key: String(i),
        label: String(numbers[i]),
        x: mark.x * xScale,
        y: mark.y * yScale,
        ux: mark.ux * xScale,
        uy: mark.uy * yScale,
        residual: fit.standardisedResiduals[i] ?? null,
        isFlagged: outliers.some(({ index }) => index === i),
      })),
      curve: Array.from({ length: places }, (_, i) => {
        const at = low - air + ((high - low + 2 * air) * i) / (places - 1)
        const value = fit.intercept + fit.slope * at
        const half = factor * fit.lineError(at)
        return {
          x: at * xScale,
          y: value * yScale,
          low: (value - half) * yScale,
          high: (value + half) * yScale,
        }
      }),
      caption: `${lineWords[line]}, ${methodWords[method]}. Bars are standard uncertainties of the readings' own; the band holds the line with 95 %.`,
    }
  } catch (error) {
    if (error instanceof RangeError) return null
    throw error
  }
}

const squares = { label: '(kIgr)²/2, 10⁻⁹ T² m²', name: '(kIgr)²/2' }
const volts = { label: 'V, V', name: 'V' }
const axes = {
  origin: { x: squares, y: volts, xScale: 1e9, yScale: 1 },
  intercept: { x: squares, y: volts, xScale: 1e9, yScale: 1 },
  root: {
    x: { label: 'kIg, mT', name: 'kIg' },
    y: { label: '√(2V)/r, √V/mm', name: '√(2V)/r' },
    xScale: 1e3,
    yScale: 1e-3,
  },
}
