import type { BudgetInput } from './budget.ts'
import {
  type Propagation,
  type PropagationSettings,
  type RowPropagationProblem,
  RunningPropagation,
} from './running-propagation.ts'

export type { Interval } from './coverage-interval.ts'
export type { Histogram } from './histogram.ts'
export type {
  Propagation,
  PropagationProgress,
  RowPropagationProblem,
  RunningPropagation,
} from './running-propagation.ts'

export type PropagationProblem<Name extends string> = PropagationSettings & {
  /** is given the same object each time, with other values, and must not keep it */
  model: (values: Record<Name, number>) => number
  inputs: Record<Name, BudgetInput>
}

/**
 * Propagates the distributions of the inputs through the model by Monte Carlo (JCGM 101:2008). Without `samples`
 * blocks of 10⁴ trials are added until mean, standard uncertainty and both ends of the shortest interval are
 * stable to the stated digits (7.9), at least ten blocks and at most 5 × 10⁶ trials.
 *
 * The distributions are those of `BudgetInput`; degrees of freedom count only where it is `t`, and then the
 * standard uncertainty is the scale, not the standard deviation. What correlated inputs may be, see
 * `inputSampler`.
 *
 * @throws RangeError naming the argument: an input by its name, `correlations`, `samples` (100 to 10⁷), `digits`,
 *   `seed`, `coverageProbability`, `model` where it has no finite value in a trial
 */
export function propagate<Name extends string>(problem: PropagationProblem<Name>): Propagation {
  const running = startPropagation(problem)
  while (!running.isDone) running.advance()
  return running.result()
}

/** The same, to be driven block by block. */
export function startPropagation<Name extends string>(problem: PropagationProblem<Name>): RunningPropagation {
  const { model, inputs, ...settings } = problem
  const names = Object.keys(inputs) as Name[]
  const values = {} as Record<Name, number>
  for (const name of names) values[name] = inputs[name].value
  return startRowPropagation({
    ...settings,
    names,
    inputs: names.map((name) => inputs[name]),
    evaluate: (row) => {
      for (let i = 0; i < names.length; i++) values[names[i] as Name] = row[i] as number
      return model(values)
    },
  })
}

/** The same for a model that takes its values as a list. */
export function startRowPropagation(problem: RowPropagationProblem): RunningPropagation {
  return new RunningPropagation(problem)
}
