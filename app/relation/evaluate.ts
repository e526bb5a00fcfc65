import { type Expression, type FunctionName, type Operator, quote } from './expression.ts'
import { FormulaProblem } from './problem.ts'
import type { Values } from './quantities.ts'

const functions: Record<FunctionName, (x: number) => number> = {
  sqrt: Math.sqrt,
  cbrt: Math.cbrt,
  abs: Math.abs,
  sin: Math.sin,
  cos: Math.cos,
  tan: Math.tan,
  exp: Math.exp,
  ln: Math.log,
}
const operations: Record<Operator, (a: number, b: number) => number> = {
  '+': (a, b) => a + b,
  '-': (a, b) => a - b,
  '*': (a, b) => a * b,
  '/': (a, b) => a / b,
  '^': (a, b) => a ** b,
}

/**
 * The value of an expression: one visit to each of its parts.
 *
 * @throws FormulaProblem naming the place where it has no finite value
 */
export function evaluate(expression: Expression, values: Values): number {
  switch (expression.kind) {
    case 'number':
      return expression.value
    case 'quantity':
      return values[expression.quantity]
    case 'negative':
      return -evaluate(expression.of, values)
    case 'function': {
      const x = evaluate(expression.of, values)
      return finite(functions[expression.name](x), expression)
    }
    case 'operation': {
      const a = evaluate(expression.left, values)
      const b = evaluate(expression.right, values)
      return finite(operations[expression.operator](a, b), expression, b)
    }
  }
}

const none: Values = {
  anodeVoltage: Number.NaN,
  coilCurrent: Number.NaN,
  beamDiameter: Number.NaN,
  beamRadius: Number.NaN,
  turns: Number.NaN,
  coilRadius: Number.NaN,
  coilSeparation: Number.NaN,
  magneticConstant: Number.NaN,
}

/** The value of an expression that holds no quantity. Throws as `evaluate`. */
export const evaluateConstant = (expression: Expression): number => evaluate(expression, none)

function finite(value: number, at: Expression, right?: number): number {
  if (Number.isFinite(value)) return value
  if (at.kind === 'operation' && at.operator === '/' && right === 0)
    throw new FormulaProblem('division-by-zero', `In ${quote(at)} something is divided by zero.`)
  if (Number.isNaN(value))
    throw new FormulaProblem('root-of-negative', `${quote(at)} has no value: a root of something negative.`)
  throw new FormulaProblem('not-finite', `${quote(at)} grows beyond any number that a computer keeps.`)
}
