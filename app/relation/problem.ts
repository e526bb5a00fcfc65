/** What stops the reading of a formula, in the order in which it is looked for. */
export const readingProblems = [
  'empty',
  'too-long',
  'equals-sign',
  'comma',
  'character',
  'too-deep',
  'unreadable',
  'not-arithmetic',
  'number',
  'function',
  'unknown-symbol',
  'too-many-parts',
] as const
export const unitProblems = ['unlike-sum', 'exponent', 'power-too-large', 'function-of-unit'] as const
export const valueProblems = ['division-by-zero', 'root-of-negative', 'not-finite'] as const

export type ProblemCode =
  | (typeof readingProblems)[number]
  | (typeof unitProblems)[number]
  | (typeof valueProblems)[number]

/** A formula that cannot be used, with the reason as a sentence for whoever typed it. */
export class FormulaProblem extends RangeError {
  readonly code: ProblemCode

  constructor(code: ProblemCode, sentence: string) {
    super(sentence)
    this.name = 'FormulaProblem'
    this.code = code
  }
}
