import { type ColumnMapping, type Role, unitsOf } from './mapping.ts'

const quantities: [Exclude<Role, 'uVoltage' | 'uCurrent' | 'uLength'>, RegExp][] = [
  ['halfWidth', /^(moved|half|setting)/],
  ['rung', /^(rung|rungs)$/],
  ['left', /^(left|x1)$/],
  ['right', /^(right|x2)$/],
  ['diameter', /^(d|diam|diameter)$/],
  ['radius', /^(r|rad|radius)$/],
  ['current', /^(i|current|curr|coil|coils|amps|amperes)$/],
  ['voltage', /^(v|va|volts|voltage|anode|accelerating|potential)$/],
]
const uncertain = /^(u|±|σ|sigma|δ|delta|err|error|unc|uncertainty|sd|se)$/
const uncertaintyOf = {
  voltage: 'uVoltage',
  current: 'uCurrent',
  diameter: 'uLength',
  radius: 'uLength',
  left: 'uLength',
  right: 'uLength',
} as const

/**
 * What the columns seem to hold, by their headings: 'V', 'I (A)', 'd_cm', 'u(d) / mm', 'anode voltage [V]'. A role goes to the
 * first column that asks for it. A length without a unit in its heading has none.
 */
export function guessColumns(headings: readonly string[]): (ColumnMapping | null)[] {
  const taken = new Set<Role>()
  return headings.map((heading) => {
    const guess = guessColumn(heading)
    if (!guess || taken.has(guess.role)) return null
    taken.add(guess.role)
    return guess
  })
}

function guessColumn(heading: string): ColumnMapping | null {
  const words = heading.normalize('NFKC').match(/[\p{L}\p{N}±]+/gu) ?? []
  // A large U is the voltage's other symbol, a small one stands for its uncertainty.
  const tokens = words.flatMap((word) => (word === 'U' ? ['voltage'] : splitUncertain(word.toLowerCase())))
  const isUncertain = tokens.some((token) => uncertain.test(token))
  const quantity = quantities.find(([, pattern]) => tokens.some((token) => pattern.test(token)))?.[0]
  if (!quantity) return null
  const role: Role | undefined = isUncertain
    ? uncertaintyOf[quantity as keyof typeof uncertaintyOf]
    : quantity
  return role ? { role, unit: unitIn(words, role) } : null
}

/** 'uv' or 'Δd': a quantity with the sign of its uncertainty before it. */
function splitUncertain(word: string): string[] {
  const [, sign, symbol] = /^(u|δ|σ|±)(v|i|d|r)$/.exec(word) ?? []
  return sign && symbol ? [sign, symbol] : [word]
}

function unitIn(words: readonly string[], role: Role): string {
  const units = Object.keys(unitsOf[role])
  const own = words.findLast((word) => units.includes(word))
  if (own) return own
  // Volts and amperes go without saying; lengths do not.
  if (units.includes('V')) return 'V'
  return units.includes('A') ? 'A' : ''
}
