import { requireDegreesOfFreedom, requireFinite, requireNotNegative } from '#app/statistics/domain.ts'
import { coverageFactor, effectiveDegreesOfFreedom } from './coverage.ts'
import { derivative } from './sensitivity.ts'

export type Distribution = 'normal' | 'rectangular' | 'triangular' | 'uShaped' | 't'

/**
 * One input of a budget. `degreesOfFreedom` is Infinity when left out. `common` says that the input is the
 * same for all readings of a run, so that a mean does not reduce its part.
 */
export type BudgetInput = {
  value: number
  standardUncertainty: number
  degreesOfFreedom?: number
  distribution?: Distribution
  common?: boolean
}

export type Correlation = { a: string; b: string; r: number }

export type Contribution = {
  /** ∂result/∂input */
  sensitivity: number
  /** |sensitivity| × standard uncertainty, in the unit of the result */
  contribution: number
  /** part of the variance; with correlations the covariances are halved between the two inputs */
  share: number
}

export type UncertaintyBudget<Name extends string = string> = {
  value: number
  standardUncertainty: number
  contributions: Record<Name, Contribution>
  effectiveDegreesOfFreedom: number
  coverageFactor: number
  expandedUncertainty: number
  /** combined uncertainty of the inputs that are common to the readings of a run, and of the others */
  commonUncertainty: number
  independentUncertainty: number
  /** false when inputs with finite degrees of freedom are correlated: then Monte Carlo gives the interval */
  isWelchSatterthwaiteValid: boolean
}

/**
 * Uncertainty budget to first order (JCGM 100:2008, 5), with sensitivities that are partial derivatives,
 * effective degrees of freedom by Welch and Satterthwaite and an expanded uncertainty for 95 % by
 * Student's t. The degrees of freedom are not rounded.
 *
 * @param model takes one value an input, by name, and returns the result
 * @param inputs at least one
 * @param correlations coefficients between −1 and 1, each pair once; together they must be possible
 * @throws RangeError naming the argument: an input by its name, `model` where it has no finite value at
 *   the inputs, an input again where the model has no derivative there, `correlations`
 */
export function uncertaintyBudget<Name extends string>(problem: {
  model: (values: Record<Name, number>) => number
  inputs: Record<Name, BudgetInput>
  correlations?: readonly Correlation[]
}): UncertaintyBudget<Name> {
  const { model, inputs, correlations = [] } = problem
  const names = Object.keys(inputs) as Name[]
  if (names.length === 0) throw new RangeError('inputs must not be empty')
  for (const name of names) requireInput(name, inputs[name])
  const values = {} as Record<Name, number>
  for (const name of names) values[name] = inputs[name].value
  const value = model({ ...values })
  if (!Number.isFinite(value)) throw new RangeError(`model must be finite at the inputs, gave ${value}`)
  const sensitivities = {} as Record<Name, number>
  for (const name of names) {
    const input = inputs[name]
    const along = (x: number): number => model({ ...values, [name]: x })
    const scale = Math.max(input.standardUncertainty, 1e-3 * Math.abs(input.value)) || 1e-3
    const slope = derivative(along, input.value, scale)
    if (slope === null) throw new RangeError(`${name} must have a value about which the model is defined`)
    sensitivities[name] = slope.value
  }
  return combineBudget({ value, inputs, sensitivities, correlations })
}

/**
 * The second half of a budget, for a model whose partial derivatives are known.
 *
 * @throws RangeError as `uncertaintyBudget` does
 */
export function combineBudget<Name extends string>(problem: {
  value: number
  inputs: Record<Name, Omit<BudgetInput, 'value'>>
  sensitivities: Record<Name, number>
  correlations?: readonly Correlation[]
}): UncertaintyBudget<Name> {
  const { value, inputs, sensitivities, correlations = [] } = problem
  requireFinite('value', value)
  const names = Object.keys(inputs) as Name[]
  const signed = names.map((name) => {
    requireFinite(`sensitivities.${name}`, sensitivities[name])
    return sensitivities[name] * inputs[name].standardUncertainty
  })
  const freedom = names.map((name) => inputs[name].degreesOfFreedom ?? Number.POSITIVE_INFINITY)
  const pairs = correlationPairs(names, correlations)
  const parts = signed.map((part) => part * part)
  for (const { a, b, r } of pairs) {
    const covariance = r * (signed[a] as number) * (signed[b] as number)
    parts[a] = (parts[a] as number) + covariance
    parts[b] = (parts[b] as number) + covariance
  }
  const variance = Math.max(0, sum(parts))
  const standardUncertainty = Math.sqrt(variance)
  const magnitudes = signed.map(Math.abs)
  const independentVariance = sum(magnitudes.map((part) => part * part))
  // With correlations the combined variance takes the place of Σu² in the formula's numerator.
  const nu = effectiveDegreesOfFreedom(magnitudes, freedom)
  const effective =
    pairs.length > 0 && independentVariance > 0 ? nu * (variance / independentVariance) ** 2 : nu
  // Full cancellation by correlation leaves nothing to be covered, whatever the factor.
  const effectiveNu = effective > 0 ? effective : Number.POSITIVE_INFINITY
  const k = coverageFactor(effectiveNu)
  const contributions = {} as Record<Name, Contribution>
  let common = 0
  names.forEach((name, i) => {
    const part = parts[i] as number
    contributions[name] = {
      sensitivity: sensitivities[name],
      contribution: magnitudes[i] as number,
      share: variance > 0 ? part / variance : 0,
    }
    if (inputs[name].common) common += part
  })
  return {
    value,
    standardUncertainty,
    contributions,
    effectiveDegreesOfFreedom: effectiveNu,
    coverageFactor: k,
    expandedUncertainty: k * standardUncertainty,
    commonUncertainty: Math.sqrt(Math.max(0, common)),
    independentUncertainty: Math.sqrt(Math.max(0, variance - common)),
    isWelchSatterthwaiteValid: pairs.every(
      ({ a, b, r }) => r === 0 || (freedom[a] === Number.POSITIVE_INFINITY && freedom[b] === freedom[a]),
    ),
  }
}

const distributions: readonly string[] = [
  'normal',
  'rectangular',
  'triangular',
  'uShaped',
  't',
] satisfies Distribution[]

function requireInput(name: string, input: BudgetInput): void {
  requireFinite(`${name}.value`, input.value)
  requireNotNegative(`${name}.standardUncertainty`, input.standardUncertainty)
  if (input.degreesOfFreedom !== undefined) {
    requireDegreesOfFreedom(`${name}.degreesOfFreedom`, input.degreesOfFreedom)
  }
  if (input.distribution !== undefined && !distributions.includes(input.distribution)) {
    throw new RangeError(`${name}.distribution must be one of ${distributions.join(', ')}`)
  }
}

function correlationPairs(names: readonly string[], correlations: readonly Correlation[]) {
  const seen = new Set<string>()
  const pairs = correlations.map(({ a, b, r }) => {
    const [i, j] = [names.indexOf(a), names.indexOf(b)]
    if (i < 0 || j < 0) throw new RangeError(`correlations must name inputs, got ${a} and ${b}`)
    if (i === j) throw new RangeError(`correlations must be between two inputs, got ${a} twice`)
    if (!(Math.abs(r) <= 1)) throw new RangeError(`correlations must lie between -1 and 1, got ${r}`)
    const key = `${Math.min(i, j)} ${Math.max(i, j)}`
    if (seen.has(key)) throw new RangeError(`correlations must hold each pair once, got ${a} and ${b} again`)
    seen.add(key)
    return { a: i, b: j, r }
  })
  if (pairs.length > 1) requirePossible(names.length, pairs)
  return pairs
}

/** Cholesky factorisation; coefficients that no joint distribution has leave a negative pivot. */
function requirePossible(size: number, pairs: { a: number; b: number; r: number }[]): void {
  const matrix = Array.from({ length: size }, (_, i) =>
    Array.from({ length: size }, (_, j): number => (i === j ? 1 : 0)),
  )
  const at = (i: number, j: number): number => matrix[i]?.[j] ?? 0
  const set = (i: number, j: number, value: number): void => {
    const row = matrix[i]
    if (row) row[j] = value
  }
  for (const { a, b, r } of pairs) {
    set(a, b, r)
    set(b, a, r)
  }
  for (let column = 0; column < size; column++) {
    const pivot = at(column, column)
    if (pivot < -1e-9) throw new RangeError('correlations must be possible together (positive semi-definite)')
    for (let i = column + 1; i < size; i++) {
      const below = at(i, column)
      if (pivot <= 1e-12) {
        if (Math.abs(below) > 1e-6) {
          throw new RangeError('correlations must be possible together (positive semi-definite)')
        }
        continue
      }
      for (let j = column + 1; j < size; j++) set(i, j, at(i, j) - (below * at(column, j)) / pivot)
    }
  }
}

function sum(values: readonly number[]): number {
  return values.reduce((total, value) => total + value, 0)
}
