import { coulombPerKilogram, isSame, unitOf } from './dimension.ts'
import { dimensionOf } from './dimension-of.ts'
import { type Expression, print, quantitiesIn } from './expression.ts'
import type { Random } from './points.ts'
import { FormulaProblem, type ProblemCode } from './problem.ts'
import { quantities, type Symbols } from './quantities.ts'
import { readFormula } from './read-formula.ts'
import { findSlips, type Slip } from './slips.ts'
import { slipSentence } from './words.ts'

export type Finding = { code: ProblemCode | 'unit' | Slip['kind']; sentence: string }

export type RelationCheck = {
  /** The formula as it was read, with every sign and bracket; null where it could not be. */
  readAs: string | null
  /** What is wrong with it. None where it holds. */
  findings: Finding[]
  holds: boolean
  /** It takes the coils to be as far apart as their radius. */
  isHelmholtz: boolean
}

/**
 * Whether a formula is the relation between e/m and what is read at a bench: its unit is C/kg, and it agrees with the
 * physics at settings drawn by chance. The findings name the kind of a slip and never what would be right.
 *
 * @param asked.symbols as `readSymbols` gives them
 * @param asked.random uniform between 0 and 1; from the same numbers comes the same answer
 */
export function checkRelation(asked: { text: string; symbols: Symbols; random: Random }): RelationCheck {
  const refused = { readAs: null, holds: false, isHelmholtz: false }
  try {
    return judge(readFormula(asked.text, asked.symbols), asked)
  } catch (error) {
    return { ...refused, findings: [findingOf(error)] }
  }
}

function judge(
  expression: Expression,
  { symbols, random }: { symbols: Symbols; random: Random },
): RelationCheck {
  const used = quantitiesIn(expression)
  const usedSymbols = Object.fromEntries(
    quantities.filter((quantity) => used.has(quantity)).map((quantity) => [quantity, symbols[quantity]]),
  )
  const findings: Finding[] = []
  try {
    const dimension = dimensionOf(expression)
    if (!isSame(dimension, coulombPerKilogram))
      findings.push({
        code: 'unit',
        sentence: `Its unit comes out as ${unitOf(dimension)}, and that of e/m is C/kg.`,
      })
    for (const slip of findSlips(expression, random))
      findings.push({ code: slip.kind, sentence: slipSentence(slip, usedSymbols) })
  } catch (error) {
    findings.push(findingOf(error))
  }
  return {
    readAs: print(expression),
    findings,
    holds: findings.length === 0,
    isHelmholtz: !used.has('coilSeparation'),
  }
}

function findingOf(error: unknown): Finding {
  if (error instanceof FormulaProblem) return { code: error.code, sentence: error.message }
  throw error
}
