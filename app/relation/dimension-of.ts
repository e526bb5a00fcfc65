import { type Dimension, dimensionless, isSame, power, product, unitOf } from './dimension.ts'
import { evaluateConstant } from './evaluate.ts'
import { type Expression, quantitiesIn, quote } from './expression.ts'
import { largestPower } from './limits.ts'
import { FormulaProblem } from './problem.ts'
import { quantityWords } from './quantities.ts'

type Operation = Extract<Expression, { kind: 'operation' }>
const roots: Partial<Record<string, number>> = { sqrt: 1 / 2, cbrt: 1 / 3, abs: 1 }

/**
 * The dimension of an expression, from its quantities up.
 *
 * @throws FormulaProblem naming the place where unlike dimensions are added, an exponent is no number, or a function is
 *   taken of something with a unit
 */
export function dimensionOf(expression: Expression): Dimension {
  switch (expression.kind) {
    case 'number':
      return dimensionless
    case 'quantity':
      return quantityWords[expression.quantity].dimension
    case 'negative':
      return dimensionOf(expression.of)
    case 'function':
      return ofFunction(expression)
    case 'operation':
      return ofOperation(expression)
  }
}

const isIn = (dimension: Dimension): string =>
  isSame(dimension, dimensionless) ? 'is a bare number' : `is in ${unitOf(dimension)}`

function ofFunction({ name, of }: Extract<Expression, { kind: 'function' }>): Dimension {
  const dimension = dimensionOf(of)
  const exponent = roots[name]
  if (exponent !== undefined) return power(dimension, exponent)
  if (isSame(dimension, dimensionless)) return dimensionless
  throw new FormulaProblem(
    'function-of-unit',
    `${name} can be taken of a bare number alone, and ${quote(of)} ${isIn(dimension)}.`,
  )
}

function ofOperation(operation: Operation): Dimension {
  const { operator, left, right } = operation
  if (operator === '^') return ofPower(operation)
  const a = dimensionOf(left)
  const b = dimensionOf(right)
  if (operator === '*') return product(a, b)
  if (operator === '/') return product(a, b, -1)
  if (isSame(a, b)) return a
  throw new FormulaProblem(
    'unlike-sum',
    `In ${quote(operation)} unlike things are ${operator === '+' ? 'added' : 'subtracted'}: ${quote(left)} ${isIn(a)}, ${quote(right)} ${isIn(b)}.`,
  )
}

function ofPower({ left, right }: Operation): Dimension {
  const base = dimensionOf(left)
  const exponent = dimensionOf(right)
  if (!isSame(exponent, dimensionless))
    throw new FormulaProblem(
      'exponent',
      `The exponent ${quote(right)} ${isIn(exponent)}: it has to be a bare number.`,
    )
  if (isSame(base, dimensionless)) return dimensionless
  if (quantitiesIn(right).size > 0)
    throw new FormulaProblem(
      'exponent',
      `${quote(left)} ${isIn(base)}: its exponent has to be written as a number, and ${quote(right)} is none.`,
    )
  const times = evaluateConstant(right)
  if (Math.abs(times) > largestPower)
    throw new FormulaProblem(
      'power-too-large',
      `The exponent ${quote(right)} of ${quote(left)} is beyond any that can belong here.`,
    )
  return power(base, times)
}
