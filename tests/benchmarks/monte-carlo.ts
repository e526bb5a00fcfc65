import { max, mean, parse, quantileSeq, std } from 'mathjs'
import type { BudgetInput } from '#app/metrology/budget.ts'
import { propagate } from '#app/metrology/monte-carlo.ts'
import { RandomNumbers } from '#app/statistics/random.ts'
import { type Figure, measure, requireAgreement } from './measure.ts'

type Name = 'V' | 'I' | 'r' | 'R' | 'left' | 'right'

const formula = '2 V / ((field * (r + (right - left) / 2))^2 - (V / 299792458)^2)'
const field = `${0.8 ** 1.5 * 1.25663706127e-6 * 130} * I / R`

const inputs: Record<Name, BudgetInput> = {
  V: { value: 200, standardUncertainty: 1 },
  I: { value: 1.5, standardUncertainty: 0.01 },
  r: { value: 0.0407, standardUncertainty: 0.0005 },
  R: { value: 0.15, standardUncertainty: 0.001 },
  left: { value: 0, standardUncertainty: 0.0003, distribution: 'rectangular' },
  right: { value: 0, standardUncertainty: 0.0003, distribution: 'rectangular' },
}

const factor = 0.8 ** 1.5 * 1.25663706127e-6 * 130
function model({ V, I, r, R, left, right }: Record<Name, number>): number {
  const fieldRadius = ((factor * I) / R) * (r + (right - left) / 2)
  return (2 * V) / (fieldRadius * fieldRadius - (V / 299_792_458) ** 2)
}

/** The formula evaluated by the library for the same distributions, and the library's own summary of the results. */
function byLibrary(samples: number, seed: number): { mean: number; deviation: number } {
  const random = new RandomNumbers(seed)
  const code = parse(formula.replace('field', field)).compile()
  const results: number[] = []
  const scope = {} as Record<Name, number>
  for (let i = 0; i < samples; i++) {
    for (const name of Object.keys(inputs) as Name[]) {
      const { value, standardUncertainty, distribution } = inputs[name]
      const unit = distribution ? Math.sqrt(12) * (random.uniform() - 0.5) : random.normal()
      scope[name] = value + standardUncertainty * unit
    }
    results.push(code.evaluate(scope))
  }
  const [low, high] = quantileSeq(results, [0.025, 0.975]) as unknown as [number, number]
  if (!(low < high && high < max(results))) throw new Error('no interval')
  return { mean: mean(results) as number, deviation: std(results) as unknown as number }
}

export function monteCarloFigures(): Figure[] {
  const few = 20_000
  const ours = propagate({ model, inputs, samples: few, seed: 1 })
  const theirs = byLibrary(few, 2)
  requireAgreement('mean', ours.mean, theirs.mean, 0.001)
  requireAgreement('deviation', ours.standardUncertainty, theirs.deviation, 0.03)
  const [million] = measure((call) => propagate({ model, inputs, samples: 1e6, seed: call }).mean) as [number]
  const [short, long] = measure(
    (call) => propagate({ model, inputs, samples: few, seed: call }).mean,
    (call) => byLibrary(few, call).mean,
  ) as [number, number]
  return [
    {
      name: '10⁶ Monte Carlo samples of six inputs',
      seconds: million,
      goalSeconds: 1,
      library: { name: 'mathjs, compiled formula', ratio: long / short },
    },
  ]
}
