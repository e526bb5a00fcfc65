import { evaluate } from './evaluate.ts'
import { print, quantitiesIn } from './expression.ts'
import { FormulaProblem } from './problem.ts'
import type { Symbols, Values } from './quantities.ts'
import { readFormula } from './read-formula.ts'

/** A formula that can be worked out at any setting. */
export type WorkedRelation = {
  readAs: string
  /** It takes the coils to be as far apart as their radius. */
  isHelmholtz: boolean
  /** e/m in C/kg where the formula is the relation; null where it has no finite value above zero. */
  valueAt: (values: Values) => number | null
}

/** @throws FormulaProblem as `readFormula` does */
export function workOutRelation({ text, symbols }: { text: string; symbols: Symbols }): WorkedRelation {
  const expression = readFormula(text, symbols)
  return {
    readAs: print(expression),
    isHelmholtz: !quantitiesIn(expression).has('coilSeparation'),
    valueAt(values) {
      try {
        const value = evaluate(expression, values)
        return value > 0 ? value : null
      } catch (error) {
        if (error instanceof FormulaProblem) return null
        throw error
      }
    },
  }
}
