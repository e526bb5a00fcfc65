import type { RandomNumbers } from '#app/statistics/random.ts'
import type { BudgetInput } from './budget.ts'
import type { CorrelatedPair } from './correlations.ts'
import { correlationFactor } from './correlations.ts'

/** Draws the values of one input for a block of trials into its column. */
type Fill = (columns: Float64Array, trials: number) => void

/**
 * What draws all inputs for a block of trials. The values of input i stand at i·`blockLength` and after.
 *
 * Independent inputs have the distributions of JCGM 101:2008, 6.4. Of correlated inputs, normal ones are drawn
 * from their joint normal distribution (JCGM 101:2008, 6.4.8), and `t` ones with the same degrees of freedom
 * from their joint t distribution (JCGM 102:2011, 5.3.2), also where they are said to have r = 0: they then share
 * how badly their scale is known. For others correlations alone do not tell the joint distribution, and they are
 * refused.
 *
 * @throws RangeError naming an input's degrees of freedom where it is sampled as `t` with two or fewer, for
 *   then it has no standard deviation; `correlations` between inputs that are neither all normal nor all t
 */
export function inputSampler(problem: {
  names: readonly string[]
  inputs: readonly BudgetInput[]
  pairs: readonly CorrelatedPair[]
  blockLength: number
  random: RandomNumbers
}): Fill {
  const { names, inputs, blockLength, random } = problem
  inputs.forEach((input, i) => {
    if (input.distribution === 't' && tFreedom(input) <= 2) {
      throw new RangeError(
        `${names[i]}.degreesOfFreedom must be above 2 where it is sampled as t, got ${input.degreesOfFreedom}`,
      )
    }
  })
  const isT = (i: number): boolean => tFreedom(inputs[i] as BudgetInput) < Number.POSITIVE_INFINITY
  const pairs = problem.pairs.filter(({ a, b, r }) => r !== 0 || (isT(a) && isT(b)))
  const fills = connectedGroups(inputs.length, pairs).map((group): Fill => {
    const [first] = group
    if (group.length > 1) return jointFill(problem, group, pairs)
    return independentFill(inputs[first as number] as BudgetInput, (first as number) * blockLength, random)
  })
  return (columns, trials) => {
    for (const fill of fills) fill(columns, trials)
  }
}

function tFreedom({ distribution, degreesOfFreedom }: BudgetInput): number {
  return distribution === 't' ? (degreesOfFreedom ?? Number.POSITIVE_INFINITY) : Number.POSITIVE_INFINITY
}

/** A loop for each distribution, since one that called what draws would box every number. */
function independentFill(input: BudgetInput, offset: number, random: RandomNumbers): Fill {
  const { value, standardUncertainty: u, distribution = 'normal' } = input
  if (u === 0) {
    return (columns, trials) => {
      columns.fill(value, offset, offset + trials)
    }
  }
  const nu = tFreedom(input)
  if (nu < Number.POSITIVE_INFINITY) {
    return (columns, trials) => {
      for (let i = 0; i < trials; i++) {
        columns[offset + i] = value + (u * random.normal()) / Math.sqrt(random.chiSquaredRatio(nu))
      }
    }
  }
  switch (distribution) {
    case 'rectangular':
      return (columns, trials) => {
        const width = u * Math.sqrt(12)
        for (let i = 0; i < trials; i++) columns[offset + i] = value + width * (random.uniform() - 0.5)
      }
    case 'triangular':
      return (columns, trials) => {
        const halfWidth = u * Math.sqrt(6)
        for (let i = 0; i < trials; i++) {
          columns[offset + i] = value + halfWidth * (random.uniform() - random.uniform())
        }
      }
    case 'uShaped':
      return (columns, trials) => {
        const halfWidth = u * Math.SQRT2
        for (let i = 0; i < trials; i++) {
          columns[offset + i] = value + halfWidth * Math.sin(2 * Math.PI * random.uniform())
        }
      }
    default:
      return (columns, trials) => {
        for (let i = 0; i < trials; i++) columns[offset + i] = value + u * random.normal()
      }
  }
}

/** Correlated inputs, normal or t: the rows of L times the same independent normal numbers. */
function jointFill(
  problem: Parameters<typeof inputSampler>[0],
  group: readonly number[],
  pairs: readonly CorrelatedPair[],
): Fill {
  const { names, inputs, blockLength, random } = problem
  const members = group.map((i) => inputs[i] as BudgetInput)
  const nu = tFreedom(members[0] as BudgetInput)
  members.forEach((member, i) => {
    const isNormal = (member.distribution ?? 'normal') === 'normal' || member.distribution === 't'
    if (!isNormal || tFreedom(member) !== nu) {
      throw new RangeError(
        `correlations must be between normal inputs or t inputs of equal degrees of freedom, got ${names[group[0] as number]} and ${names[group[i] as number]}`,
      )
    }
  })
  const size = group.length
  const inside = pairs
    .filter(({ a }) => group.includes(a))
    .map(({ a, b, r }) => ({ a: group.indexOf(a), b: group.indexOf(b), r }))
  const factor = correlationFactor(size, inside)
  const normals = new Float64Array(size)
  return (columns, trials) => {
    for (let trial = 0; trial < trials; trial++) {
      for (let j = 0; j < size; j++) normals[j] = random.normal()
      const stretch = nu < Number.POSITIVE_INFINITY ? 1 / Math.sqrt(random.chiSquaredRatio(nu)) : 1
      for (let i = 0; i < size; i++) {
        let sum = 0
        for (let j = 0; j <= i; j++) sum += (factor[i * size + j] as number) * (normals[j] as number)
        const { value, standardUncertainty } = members[i] as BudgetInput
        columns[(group[i] as number) * blockLength + trial] = value + standardUncertainty * stretch * sum
      }
    }
  }
}

/** Inputs that hang together by correlations, each group in the order of its first member. */
function connectedGroups(size: number, pairs: readonly CorrelatedPair[]): number[][] {
  const root = Array.from({ length: size }, (_, i) => i)
  for (const { a, b } of pairs) {
    const [from, to] = [root[a] as number, root[b] as number]
    root.forEach((of, i) => {
      if (of === Math.max(from, to)) root[i] = Math.min(from, to)
    })
  }
  const groups = new Map<number, number[]>()
  root.forEach((of, i) => {
    groups.set(of, [...(groups.get(of) ?? []), i])
  })
  return [...groups.values()]
}
