import { requireDegreesOfFreedom, requireFinite, requireNotNegative } from '#app/statistics/domain.ts'
import { type Correlation, correlatedPairs } from './correlations.ts'
import { coverageFactor, effectiveDegreesOfFreedom } from './coverage.ts'
import { derivative } from './sensitivity.ts'

export type { Correlation } from './correlations.ts'

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
 * @param model takes one value an input, by name, and returns the result; it is given the same object each time,
 *   with other values, and must not keep it
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
  const value = model(values)
  if (!Number.isFinite(value)) throw new RangeError(`model must be finite at the inputs, gave ${value}`)
  const sensitivities = {} as Record<Name, number>
  let moved = names[0] as Name
  const along = (x: number): number => {
    values[moved] = x
    return model(values)
  }
  for (const name of names) {
    const { value: centre, standardUncertainty } = inputs[name]
    moved = name
    const scale = Math.max(standardUncertainty, 1e-3 * Math.abs(centre)) || 1e-3
    const slope = derivative(along, centre, scale)
    if (slope === null) throw new RangeError(`${name} must have a value about which the model is defined`)
    sensitivities[name] = slope.value
    values[name] = centre
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
  const signed: number[] = []
  const magnitudes: number[] = []
  const parts: number[] = []
  const freedom: number[] = []
  for (const name of names) {
    const { standardUncertainty, degreesOfFreedom = Number.POSITIVE_INFINITY } = inputs[name]
    requireFinite(`sensitivities.${name}`, sensitivities[name])
    const part = sensitivities[name] * standardUncertainty
    signed.push(part)
    magnitudes.push(Math.abs(part))
    parts.push(part * part)
    freedom.push(degreesOfFreedom)
  }
  const independentVariance = sum(parts)
  const pairs = correlatedPairs(names, correlations)
  for (const { a, b, r } of pairs) {
    const covariance = r * (signed[a] as number) * (signed[b] as number)
    parts[a] = (parts[a] as number) + covariance
    parts[b] = (parts[b] as number) + covariance
  }
  const variance = Math.max(0, sum(parts))
  const standardUncertainty = Math.sqrt(variance)
  // With correlations the combined variance takes the place of Σu² in the formula's numerator.
  const nu = effectiveDegreesOfFreedom(magnitudes, freedom)
  const effective =
    pairs.length > 0 && independentVariance > 0 ? nu * (variance / independentVariance) ** 2 : nu
  // Full cancellation by correlation leaves nothing to be covered, whatever the factor.
  const effectiveNu = effective > 0 ? effective : Number.POSITIVE_INFINITY
  const k = coverageFactor(effectiveNu)
  const contributions = {} as Record<Name, Contribution>
  let common = 0
  for (let i = 0; i < names.length; i++) {
    const name = names[i] as Name
    const part = parts[i] as number
    contributions[name] = {
      sensitivity: sensitivities[name],
      contribution: magnitudes[i] as number,
      share: variance > 0 ? part / variance : 0,
    }
    if (inputs[name].common) common += part
  }
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

/** @throws RangeError naming the input and what of it is wrong */
export function requireInput(name: string, input: BudgetInput): void {
  requireFinite(`${name}.value`, input.value)
  requireNotNegative(`${name}.standardUncertainty`, input.standardUncertainty)
  if (input.degreesOfFreedom !== undefined) {
    requireDegreesOfFreedom(`${name}.degreesOfFreedom`, input.degreesOfFreedom)
  }
  if (input.distribution !== undefined && !distributions.includes(input.distribution)) {
    throw new RangeError(`${name}.distribution must be one of ${distributions.join(', ')}`)
  }
}

function sum(values: readonly number[]): number {
  let total = 0
  for (const value of values) total += value
  return total
}
