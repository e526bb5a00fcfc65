import type { Quantity } from './quantities.ts'

export const functionNames = ['sqrt', 'cbrt', 'abs', 'sin', 'cos', 'tan', 'exp', 'ln'] as const
export type FunctionName = (typeof functionNames)[number]
export type Operator = '+' | '-' | '*' | '/' | '^'

/** A formula as a tree of the few parts that one may have. */
export type Expression =
  | { kind: 'number'; value: number; written?: string }
  | { kind: 'quantity'; quantity: Quantity; symbol: string }
  | { kind: 'negative'; of: Expression }
  | { kind: 'operation'; operator: Operator; left: Expression; right: Expression }
  | { kind: 'function'; name: FunctionName; of: Expression }

/** The quantities that stand in an expression. */
export function quantitiesIn(expression: Expression): Set<Quantity> {
  switch (expression.kind) {
    case 'number':
      return new Set()
    case 'quantity':
      return new Set([expression.quantity])
    case 'operation':
      return new Set([...quantitiesIn(expression.left), ...quantitiesIn(expression.right)])
    default:
      return quantitiesIn(expression.of)
  }
}

const superscripts = '⁰¹²³⁴⁵⁶⁷⁸⁹'
const written: Record<Operator, string> = { '+': ' + ', '-': ' − ', '*': '·', '/': ' / ', '^': '^' }
const ranks: Record<Operator, number> = { '+': 1, '-': 1, '*': 2, '/': 2, '^': 4 }
const highestRank = 5

function rankOf(expression: Expression): number {
  if (expression.kind === 'operation') return ranks[expression.operator]
  if (expression.kind === 'negative') return 3
  return highestRank
}

/** The expression as text that shows how it was read: every product with its sign, and brackets where they matter. */
export function print(expression: Expression): string {
  switch (expression.kind) {
    case 'number':
      return expression.written ?? String(expression.value).replace('-', '−')
    case 'quantity':
      return expression.symbol
    case 'negative':
      return `−${bracketed(expression.of, 3)}`
    case 'function':
      return `${expression.name}(${print(expression.of)})`
    case 'operation':
      return expression.operator === '^' ? printPower(expression) : printSides(expression)
  }
}

type Operation = Extract<Expression, { kind: 'operation' }>

function printSides({ operator, left, right }: Operation): string {
  const rank = ranks[operator]
  // 1 / 2·V could be read either way.
  const isQuotient = rank === 2 && left.kind === 'operation' && left.operator === '/'
  return bracketed(left, isQuotient ? highestRank : rank) + written[operator] + bracketed(right, rank + 1)
}

function printPower({ left, right }: Operation): string {
  const base = bracketed(left, highestRank)
  const digit = right.kind === 'number' ? superscripts[right.value] : undefined
  return digit ? base + digit : `${base}^${bracketed(right, highestRank)}`
}

function bracketed(expression: Expression, leastRank: number): string {
  const text = print(expression)
  return rankOf(expression) < leastRank ? `(${text})` : text
}

const longestPlace = 60

/** A part of a formula between quotation marks, for a sentence about it. */
export function quote(expression: Expression): string {
  const text = print(expression)
  return `“${text.length > longestPlace ? `${text.slice(0, longestPlace)}…` : text}”`
}
