import type { BudgetBench, Reading } from '#app/analysis/reading.ts'
import { seriesProblem } from '#app/analysis/reading-model.ts'
import { type UncertaintyBudget, uncertaintyBudget } from '#app/metrology/budget.ts'
import { expandIndependent } from '#app/metrology/coverage.ts'
import { checkFirstOrder, type FirstOrderCheck } from '#app/metrology/first-order-check.ts'
import type { Propagation, PropagationProgress, RunningPropagation } from '#app/metrology/monte-carlo.ts'
import { startRowPropagation } from '#app/metrology/monte-carlo.ts'

/** What e/m is propagated for. Functions cannot be posted to a worker, so the model is named by its data. */
export type MonteCarloProblem =
  | { kind: 'reading'; bench: BudgetBench; reading: Reading }
  | { kind: 'series'; bench: BudgetBench; readings: readonly Reading[] }

export type MonteCarloRequest =
  | { type: 'start'; problem: MonteCarloProblem; seed: number; digits?: 1 | 2 }
  | { type: 'stop' }

export type FirstOrder = Pick<
  UncertaintyBudget,
  'value' | 'standardUncertainty' | 'expandedUncertainty' | 'coverageFactor'
>

/** After a stop comes the result of the blocks so far, of one at least; it is not stable then. */
export type MonteCarloReport =
  | ({ type: 'progress' } & PropagationProgress)
  | { type: 'done'; result: Propagation; firstOrder: FirstOrder; check: FirstOrderCheck }
  | { type: 'refused'; reason: string }

/**
 * The worker's side of the conversation: takes requests and reports on them, one block of trials a turn, so that a
 * request to stop is heard between two. A new start takes the place of what is running.
 *
 * @param schedule runs a task in a later turn
 */
export function monteCarloSession(
  report: (report: MonteCarloReport) => void,
  schedule: (task: () => void) => void,
): (request: MonteCarloRequest) => void {
  let current: { running: RunningPropagation; firstOrder: FirstOrder } | null = null

  function finish({ running, firstOrder }: NonNullable<typeof current>) {
    current = null
    const result = running.result()
    report({
      type: 'done',
      result,
      firstOrder,
      check: checkFirstOrder({ budget: firstOrder, monteCarlo: result }),
    })
  }

  function turn(of: NonNullable<typeof current>) {
    if (current !== of) return
    refusing(() => {
      of.running.advance()
      if (of.running.isDone) return finish(of)
      report({ type: 'progress', ...of.running.progress })
      schedule(() => turn(of))
    })
  }

  function refusing(action: () => void) {
    try {
      action()
    } catch (error) {
      if (!(error instanceof RangeError)) throw error
      current = null
      report({ type: 'refused', reason: error.message })
    }
  }

  return (request) => {
    if (request.type === 'stop') {
      const stopped = current
      if (!stopped) return
      return refusing(() => {
        if (stopped.running.samples === 0) stopped.running.advance()
        finish(stopped)
      })
    }
    refusing(() => {
      const { problem, seed, digits } = request
      const readings = problem.kind === 'reading' ? [problem.reading] : problem.readings
      const rows = seriesProblem({ bench: problem.bench, readings })
      const started = {
        running: startRowPropagation({ ...rows, seed, digits }),
        firstOrder: firstOrderOf(rows),
      }
      current = started
      schedule(() => turn(started))
    })
  }
}

/** What comes from one joint t distribution has its degrees of freedom once, not once a reading. */
function firstOrderOf({
  names,
  inputs,
  correlations,
  evaluate,
}: ReturnType<typeof seriesProblem>): FirstOrder {
  const row = new Float64Array(names.length)
  const { value, contributions } = uncertaintyBudget({
    inputs: Object.fromEntries(names.map((name, i) => [name, inputs[i] as (typeof inputs)[number]])),
    model: (values) => {
      names.forEach((name, i) => {
        row[i] = values[name] as number
      })
      return evaluate(row)
    },
  })
  const isJoint = (name: string) => correlations.some(({ a, b }) => a === name || b === name)
  const parts = new Map<string, { variance: number; degreesOfFreedom: number }>()
  names.forEach((name, i) => {
    const key = isJoint(name) ? 'joint' : name
    const { degreesOfFreedom = Number.POSITIVE_INFINITY } = inputs[i] as (typeof inputs)[number]
    const variance = (parts.get(key)?.variance ?? 0) + (contributions[name]?.contribution ?? 0) ** 2
    parts.set(key, { variance, degreesOfFreedom })
  })
  const list = [...parts.values()]
  const { standardUncertainty, expandedUncertainty, coverageFactor } = expandIndependent(
    list.map(({ variance }) => Math.sqrt(variance)),
    list.map(({ degreesOfFreedom }) => degreesOfFreedom),
  )
  return { value, standardUncertainty, expandedUncertainty, coverageFactor }
}
