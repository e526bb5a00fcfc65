import { functionNames } from './expression.ts'
import { longestSymbol } from './limits.ts'
import { type Quantity, quantities, type Symbols } from './quantities.ts'

const reserved = new Set<string>([
  ...functionNames,
  ...['pi', 'π', 'mod', 'to', 'in', 'and', 'or', 'xor', 'not', 'end'],
  ...['true', 'false', 'null', 'undefined', 'NaN', 'Infinity'],
])
/** A Latin or Greek letter first, then letters, digits and underscores. */
const symbolPattern = /^[A-Za-z\u0388-\u03ff][A-Za-z0-9_\u0388-\u03ff]*$/

/** One way of writing for what looks the same: μ₀ and µ0 are μ0. */
export const normaliseSymbol = (typed: string): string => typed.trim().normalize('NFKC')

/** The symbols that a person named, and what is wrong with one, by quantity. An empty one is not used. */
export function readSymbols(typed: Partial<Record<Quantity, string>>): {
  symbols: Symbols
  errors: Partial<Record<Quantity, string>>
} {
  const symbols: Symbols = {}
  const errors: Partial<Record<Quantity, string>> = {}
  const taken = new Map<string, Quantity>()
  for (const quantity of quantities) {
    const symbol = normaliseSymbol(typed[quantity] ?? '')
    if (symbol === '') continue
    const wrong = wrongWith(symbol, taken)
    if (wrong) errors[quantity] = wrong
    else {
      symbols[quantity] = symbol
      taken.set(symbol, quantity)
    }
  }
  return { symbols, errors }
}

function wrongWith(symbol: string, taken: Map<string, Quantity>): string | null {
  if (symbol.length > longestSymbol) return `A symbol has at most ${longestSymbol} characters.`
  if (!symbolPattern.test(symbol))
    return 'A symbol begins with a Latin or Greek letter; letters, digits and _ may follow.'
  if (reserved.has(symbol)) return `${symbol} has a meaning of its own here: choose another symbol.`
  return taken.has(symbol) ? `${symbol} stands for something else already.` : null
}
