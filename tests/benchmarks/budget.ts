import type { EvalFunction } from 'mathjs'
import { derivative, parse } from 'mathjs'
import { type Reading, readingBudget, tabulateEvenness } from '#app/analysis/reading.ts'
import { type BudgetInput, uncertaintyBudget } from '#app/metrology/budget.ts'
import { bottomGun } from '#tests/analysis/benches.ts'
import { type Figure, measure, requireAgreement } from './measure.ts'
import { readingByLibrary } from './reading-by-library.ts'

const LIBRARY_ANEW = 'mathjs, formula derived each time'
const LIBRARY_PREPARED = 'mathjs, derivatives compiled before'
const AT_LEAST = 20

type Name = 'V' | 'I' | 'r' | 'R'
const factor = 0.8 ** 1.5 * 1.25663706127e-6 * 130
const formula = `2 V / ((${factor} * I / R * r)^2 - (V / 299792458)^2)`

function inputsOf(call: number): Record<Name, BudgetInput> {
  return {
    V: { value: 200 + (call % 100), standardUncertainty: 1 },
    I: { value: 1.5, standardUncertainty: 0.01 },
    r: { value: 0.0407, standardUncertainty: 0.0005, degreesOfFreedom: 5 },
    R: { value: 0.15, standardUncertainty: 0.001 },
  }
}

function model({ V, I, r, R }: Record<Name, number>): number {
  const fieldRadius = ((factor * I) / R) * r
  return (2 * V) / (fieldRadius * fieldRadius - (V / 299_792_458) ** 2)
}

type Prepared = { value: EvalFunction; slopes: [Name, EvalFunction][] }

/** The library's symbolic derivatives; without its simplification, which takes seconds. */
function prepare(): Prepared {
  const node = parse(formula)
  const slopes = (Object.keys(inputsOf(0)) as Name[]).map((name): [Name, EvalFunction] => [
    name,
    derivative(node, name, { simplify: false }).compile(),
  ])
  return { value: node.compile(), slopes }
}

/** Value and standard uncertainty alone: degrees of freedom and coverage are left out to the library's favour. */
function combine({ value, slopes }: Prepared, inputs: Record<Name, BudgetInput>) {
  const scope = { V: inputs.V.value, I: inputs.I.value, r: inputs.r.value, R: inputs.R.value }
  let variance = 0
  for (const [name, slope] of slopes)
    variance += (slope.evaluate(scope) * inputs[name].standardUncertainty) ** 2
  return { value: value.evaluate(scope) as number, standardUncertainty: Math.sqrt(variance) }
}

function formulaFigures(): Figure[] {
  const kept = prepare()
  const ours = uncertaintyBudget({ model, inputs: inputsOf(7) })
  const theirs = combine(kept, inputsOf(7))
  requireAgreement('value', ours.value, theirs.value, 1e-12)
  requireAgreement('standard uncertainty', ours.standardUncertainty, theirs.standardUncertainty, 1e-9)
  const [own, anew, again] = measure(
    (call) => uncertaintyBudget({ model, inputs: inputsOf(call) }).expandedUncertainty,
    (call) => combine(prepare(), inputsOf(call)).standardUncertainty,
    (call) => combine(kept, inputsOf(call)).standardUncertainty,
  ) as [number, number, number]
  const name = 'budget of a model with four inputs'
  return [
    { name, seconds: own, library: { name: LIBRARY_ANEW, ratio: anew / own, atLeast: AT_LEAST } },
    { name, seconds: own, library: { name: LIBRARY_PREPARED, ratio: again / own } },
  ]
}

const reading: Reading = {
  voltageVolts: 250,
  uVoltageVolts: 0.03,
  voltageDegreesOfFreedom: 14,
  currentAmps: 1.3,
  uCurrentAmps: 0.0004,
  currentDegreesOfFreedom: 22,
  leftEdges: [-0.0612, -0.0608, -0.0617],
  rightEdges: [0.0605, 0.0611, 0.0609],
}

function readingFigures(): Figure[] {
  const evenness = tabulateEvenness(bottomGun)
  const cases = Array.from({ length: 100 }, (_, i) => ({
    ...reading,
    voltageVolts: 250 + 0.01 * i,
    bench: bottomGun,
    evenness,
  }))
  const at = (call: number) => cases[call % cases.length] as (typeof cases)[number]
  const byLibrary = readingByLibrary(at(0))
  for (const call of [0, 99]) {
    const [ours, theirs] = [readingBudget(at(call)), byLibrary(at(call))]
    requireAgreement('e/m', ours.value, theirs.value, 1e-9)
    requireAgreement('uncertainty of e/m', ours.standardUncertainty, theirs.standardUncertainty, 1e-6)
  }
  const [own, theirs] = measure(
    (call) => readingBudget(at(call)).expandedUncertainty,
    (call) => byLibrary(at(call)).standardUncertainty,
  ) as [number, number]
  return [
    {
      name: 'e/m of one reading with its budget',
      seconds: own,
      goalSeconds: 20e-6,
      library: { name: LIBRARY_PREPARED, ratio: theirs / own, atLeast: AT_LEAST },
    },
  ]
}

export function budgetFigures(): Figure[] {
  return [...readingFigures(), ...formulaFigures()]
}
