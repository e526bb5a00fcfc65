import {
  type ConstantNode,
  create,
  type FunctionNode,
  type MathNode,
  type OperatorNode,
  type ParenthesisNode,
  parseDependencies,
  type SymbolNode,
} from 'mathjs/number'
import { type Expression, type FunctionName, functionNames, type Operator } from './expression.ts'
import { deepestTree, mostParts } from './limits.ts'
import { normalise } from './normalise.ts'
import { FormulaProblem } from './problem.ts'
import { type Quantity, quantities, type Symbols } from './quantities.ts'

// The parser alone: nothing of a formula is ever compiled or evaluated by the library.
const { parse } = create({ ...parseDependencies })

const operators = new Map<string, Operator>([
  ['add', '+'],
  ['subtract', '-'],
  ['multiply', '*'],
  ['divide', '/'],
  ['pow', '^'],
])

const longestShown = 20

const isPi = (name: string) => name === 'pi' || name === 'π'
const isFunctionName = (name: string): name is FunctionName =>
  (functionNames as readonly string[]).includes(name)

/**
 * A typed formula as a tree. Only numbers, the person's symbols, π, the five operations, signs, brackets and the functions
 * of `functionNames` are let through; whatever else the parser knows is refused, and nothing of the text is run.
 *
 * @param symbols as `readSymbols` gives them
 * @throws FormulaProblem with the reason as a sentence
 */
export function readFormula(typed: string, symbols: Symbols): Expression {
  const text = normalise(typed)
  const known = new Map<string, Quantity>()
  for (const quantity of quantities) {
    const symbol = symbols[quantity]
    if (symbol) known.set(symbol, quantity)
  }
  return new Reader(known).read(parsed(withProducts(text, known)))
}

const tokens = /\d[\d.]*(?:[eE][+-]?\d+)?|(?<name>[A-Za-z\u0388-\u03ff][A-Za-z0-9_\u0388-\u03ff]*)|./gu

/** A symbol before a bracket is multiplied with it; the parser would take it for a function. */
function withProducts(text: string, known: ReadonlyMap<string, Quantity>): string {
  let written = ''
  for (const { 0: whole, groups } of [...text.matchAll(tokens)].reverse()) {
    const name = groups?.name ?? ''
    const isMultiplied = (known.has(name) || isPi(name)) && written.trimStart().startsWith('(')
    written = (isMultiplied ? `(${name})` : whole) + written
  }
  return written
}

function parsed(text: string): MathNode {
  try {
    return parse(text)
  } catch (error) {
    const at = error instanceof SyntaxError && 'char' in error ? Number(error.char) - 1 : Number.NaN
    const token = /^(\d[\d.]*|[^\W\d]+|.)/u.exec(text.slice(at))?.[0]
    throw new FormulaProblem(
      'unreadable',
      Number.isFinite(at) && token
        ? `The “${token}”${at > 0 ? ` behind “${text.slice(Math.max(0, at - 15), at).trim()}”` : ''} cannot be read: look for a sign or a bracket that is missing or too much before it.`
        : 'This ends before it is complete: look for a bracket that is not closed, or a sign with nothing behind it.',
    )
  }
}

class Reader {
  readonly #known: ReadonlyMap<string, Quantity>
  #parts = 0

  constructor(known: ReadonlyMap<string, Quantity>) {
    this.#known = known
  }

  read(node: MathNode, depth = 0): Expression {
    this.#parts += 1
    if (this.#parts > mostParts || depth > deepestTree)
      throw new FormulaProblem('too-many-parts', 'This has more parts than a relation needs.')
    switch (node.type) {
      case 'ParenthesisNode':
        return this.read((node as ParenthesisNode).content, depth + 1)
      case 'ConstantNode':
        return number(node as ConstantNode)
      case 'SymbolNode':
        return this.#symbol((node as SymbolNode).name)
      case 'OperatorNode':
        return this.#operation(node as unknown as OperatorNode, depth)
      case 'FunctionNode':
        return this.#function(node as FunctionNode<MathNode>, depth)
      default:
        throw notArithmetic()
    }
  }

  #symbol(name: string): Expression {
    const quantity = this.#known.get(name)
    if (quantity) return { kind: 'quantity', quantity, symbol: name }
    if (isPi(name)) return { kind: 'number', value: Math.PI, written: 'π' }
    if (isFunctionName(name))
      throw new FormulaProblem('function', `Put brackets behind ${name}: ${name}( … ).`)
    const parts = apart(name, [...this.#known.keys()])
    const shown = name.length > longestShown ? `${name.slice(0, longestShown)}…` : name
    throw new FormulaProblem(
      'unknown-symbol',
      parts
        ? `${shown} is read as one symbol: put a space or a · between ${parts.join(' and ')}.`
        : `${shown} is not one of your symbols. If it stands for something in the table, name it there; if not, put what it is equal to in its place.`,
    )
  }

  #operation(node: OperatorNode, depth: number): Expression {
    const { fn, args } = node as unknown as { fn: string; args: MathNode[] }
    const [first, second] = args
    if (first && !second) {
      if (fn === 'unaryPlus') return this.read(first, depth + 1)
      if (fn === 'unaryMinus') return { kind: 'negative', of: this.read(first, depth + 1) }
    }
    const operator = operators.get(fn)
    if (!operator || !first || !second || args.length !== 2) throw notArithmetic()
    return {
      kind: 'operation',
      operator,
      left: this.read(first, depth + 1),
      right: this.read(second, depth + 1),
    }
  }

  #function({ fn, args }: FunctionNode<MathNode>, depth: number): Expression {
    if (fn.type !== 'SymbolNode') throw notArithmetic()
    const { name } = fn as SymbolNode
    if (!isFunctionName(name))
      throw new FormulaProblem(
        'function',
        `${name.slice(0, longestShown)} is not a function here, nor one of your symbols. There are ${functionNames.join(', ')}.`,
      )
    const [of] = args
    if (!of || args.length !== 1)
      throw new FormulaProblem('function', `${name} is taken of one thing in its brackets.`)
    return { kind: 'function', name, of: this.read(of, depth + 1) }
  }
}

function number({ value }: ConstantNode): Expression {
  // The parser also takes true, null and NaN for constants.
  if (typeof value !== 'number') throw notArithmetic()
  if (!Number.isFinite(value))
    throw new FormulaProblem('number', 'Something in it is not a number, or too large for one.')
  return { kind: 'number', value }
}

const notArithmetic = () =>
  new FormulaProblem(
    'not-arithmetic',
    'A formula holds numbers, your symbols, + − · / ^, brackets and sqrt( … ) alone. A point belongs within a number.',
  )

/** A name as known symbols written together, or null. Names are short: the parser's text is bounded. */
function apart(name: string, symbols: readonly string[]): string[] | null {
  const found: (string[] | null)[] = [[]]
  for (let end = 1; end <= name.length; end++) {
    found[end] = null
    for (const symbol of symbols) {
      const before = found[end - symbol.length]
      if (before && name.slice(0, end).endsWith(symbol)) found[end] = [...before, symbol]
    }
  }
  return found[name.length] ?? null
}
