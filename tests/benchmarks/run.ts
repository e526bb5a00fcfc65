import { analysisPageFigures } from './analysis-page.ts'
import { budgetFigures } from './budget.ts'
import { diagnosisFigures } from './diagnosis.ts'
import { fieldFigures } from './field.ts'
import { isShort, lineOf } from './measure.ts'
import { monteCarloFigures } from './monte-carlo.ts'

let hasShort = false
for (const figuresOf of [
  budgetFigures,
  fieldFigures,
  monteCarloFigures,
  diagnosisFigures,
  analysisPageFigures,
]) {
  for (const figure of await figuresOf()) {
    console.log(lineOf(figure))
    hasShort ||= isShort(figure)
  }
}
process.exitCode = hasShort ? 1 : 0
