import { requirePositive } from './domain.ts'
import {
  conditionNumber,
  correlationsOf,
  inverseOfNormal,
  solveTransposed,
  solveTriangle,
  triangulate,
} from './small-matrix.ts'

/**
 * Weighted residuals of a model, each already divided by its standard uncertainty.
 *
 * @param residuals to be filled
 * @param jacobian to be filled where it is not null: ∂residual[i]/∂parameter[j] at i·(number of parameters) + j
 * @returns false where the model has no value; a step into such a place is taken back
 */
export type ResidualFunction = (
  parameters: Float64Array,
  residuals: Float64Array,
  jacobian: Float64Array | null,
) => boolean

export type NonlinearFit = {
  parameters: number[]
  /** square roots of the diagonal of the covariance */
  errors: number[]
  /** (JᵀJ)⁻¹, not scaled by χ²: right where the residuals are divided by true uncertainties */
  covariance: number[][]
  correlations: number[][]
  /** of J with its columns brought to unit length */
  conditionNumber: number
  chiSquared: number
  degreesOfFreedom: number
  residuals: number[]
  /** diagonal of J(JᵀJ)⁻¹Jᵀ */
  leverages: number[]
  isConverged: boolean
  iterations: number
}

/** Beyond this the digits of a double do not tell the parameters apart. */
const SINGULAR = 1e13
/** A predicted gain of this part of χ² moves no parameter by a millionth of its error. */
const NOTHING_TO_GAIN = 1e-17
/** By so much two sums of the same squares may differ. */
const ROUNDING = 1e-14
/** No step changes a parameter by more than this times its size: beyond it the tangent says nothing. */
const LONGEST_STEP = 3

/**
 * Least squares of a nonlinear model by Levenberg and Marquardt's method, with the damping scaled by the lengths of the
 * Jacobian's columns, so that the units of the parameters do not matter. Each start is followed to its end and the
 * lowest χ² is returned. But for rounding, χ² never
 * is above that of any start.
 *
 * @param problem.count number of residuals, at least that of the parameters
 * @param problem.starts one or more sets of parameters; those at which the model has no value are passed over
 * @param problem.scales what counts as a noticeable change of each parameter, for the end of the search; by default the
 *   size of the first start, or 1 where that is zero
 * @param problem.mostIterations a start, default 200
 * @throws RangeError naming `starts` (none, of different lengths, not finite, or the model has a value at none of them),
 *   `count` (fewer residuals than parameters), `scales`, or `residuals` where they do not determine every parameter
 *
 * Source: J. J. Moré, The Levenberg-Marquardt algorithm, Lecture Notes in Mathematics 630 (1978) 105; the damping by
 * H. B. Nielsen, Damping parameter in Marquardt's method, IMM-REP-1999-05.
 */
export function fitNonlinear(problem: {
  residuals: ResidualFunction
  count: number
  starts: readonly (readonly number[])[]
  scales?: readonly number[]
  mostIterations?: number
}): NonlinearFit {
  const { residuals, count, starts, mostIterations = 200 } = problem
  const size = requireStarts(starts)
  if (!(Number.isInteger(count) && count >= size)) {
    throw new RangeError(`count must be at least the number of parameters (${size}), got ${count}`)
  }
  const scales = problem.scales ?? (starts[0] as readonly number[]).map((value) => Math.abs(value) || 1)
  if (scales.length !== size) throw new RangeError(`scales must be as many as the parameters (${size})`)
  scales.forEach((scale, i) => {
    requirePositive(`scales[${i}]`, scale)
  })

  const search = new Search(residuals, count, size, scales)
  let best: {
    parameters: Float64Array
    chiSquared: number
    isConverged: boolean
    iterations: number
  } | null = null
  for (const start of starts) {
    const end = search.from(start, mostIterations)
    if (end && (best === null || end.chiSquared < best.chiSquared)) best = end
  }
  if (best === null) throw new RangeError('starts must hold parameters at which the model has a value')
  return { ...search.judge(best.parameters), isConverged: best.isConverged, iterations: best.iterations }
}

class Search {
  readonly #evaluate: ResidualFunction
  readonly #count: number
  readonly #size: number
  readonly #scales: readonly number[]
  readonly #trialResiduals: Float64Array
  readonly #jacobian: Float64Array
  readonly #right: Float64Array
  readonly #damped: Float64Array
  readonly #dampedRight: Float64Array
  readonly #step: Float64Array

  constructor(evaluate: ResidualFunction, count: number, size: number, scales: readonly number[]) {
    this.#evaluate = evaluate
    this.#count = count
    this.#size = size
    this.#scales = scales
    this.#trialResiduals = new Float64Array(count)
    this.#jacobian = new Float64Array(count * size)
    this.#right = new Float64Array(count)
    this.#damped = new Float64Array(2 * size * size)
    this.#dampedRight = new Float64Array(2 * size)
    this.#step = new Float64Array(size)
  }

  from(start: readonly number[], mostIterations: number) {
    const size = this.#size
    let parameters = Float64Array.from(start)
    let trial = new Float64Array(size)
    let chiSquared = this.#chiSquaredAt(parameters, this.#trialResiduals)
    if (!Number.isFinite(chiSquared)) return null
    const lengths = new Float64Array(size)
    let damping = 1e-3
    let growth = 2
    let isConverged = false
    let iterations = 0
    let isMoved = true
    while (iterations < mostIterations && !isConverged) {
      iterations++
      if (isMoved) {
        this.#linearise(parameters, lengths)
        isMoved = false
      }
      const predicted = this.#dampedStep(damping, lengths)
      if (this.#isTooLong(parameters)) {
        damping *= growth
        growth *= 2
        continue
      }
      isConverged = chiSquared === 0 || predicted <= NOTHING_TO_GAIN * chiSquared || this.#isTiny(parameters)
      // The last step is undamped: it goes to the bottom, which comparing two almost equal χ² would not find.
      if (isConverged) this.#dampedStep(0, lengths)
      for (let j = 0; j < size; j++) trial[j] = (parameters[j] as number) + (this.#step[j] as number)
      const trialChiSquared = this.#chiSquaredAt(trial, this.#trialResiduals)
      if (trialChiSquared < chiSquared || (isConverged && trialChiSquared <= chiSquared * (1 + ROUNDING))) {
        const gain = (chiSquared - trialChiSquared) / predicted
        ;[parameters, trial] = [trial, parameters]
        chiSquared = trialChiSquared
        damping = Math.max(1e-16, damping * Math.max(1 / 3, 1 - (2 * gain - 1) ** 3))
        growth = 2
        isMoved = true
      } else {
        // Where so little is left to gain, rounding decides.
        if (predicted <= ROUNDING * chiSquared) isConverged = true
        damping *= growth
        growth *= 2
        if (damping > 1e30) break
      }
    }
    return { parameters, chiSquared, isConverged, iterations }
  }

  judge(parameters: Float64Array): Omit<NonlinearFit, 'isConverged' | 'iterations'> {
    const [count, size] = [this.#count, this.#size]
    const residuals = new Float64Array(count)
    const jacobian = new Float64Array(count * size)
    this.#evaluate(parameters, residuals, jacobian)
    const triangle = jacobian.slice()
    triangulate(triangle, count, size, residuals.slice())
    const condition = conditionNumber(triangle, size)
    if (!(condition < SINGULAR)) throw new RangeError('residuals must determine every parameter')
    const covariance = inverseOfNormal(triangle, size)
    const leverages = Array.from({ length: count }, (_, i) => {
      const row = solveTransposed(triangle, size, jacobian.subarray(i * size, (i + 1) * size))
      return row.reduce((sum, entry) => sum + entry * entry, 0)
    })
    return {
      parameters: [...parameters],
      errors: covariance.map((row, i) => Math.sqrt(row[i] as number)),
      covariance,
      correlations: correlationsOf(covariance),
      conditionNumber: condition,
      chiSquared: sumOfSquares(residuals),
      degreesOfFreedom: count - size,
      residuals: [...residuals],
      leverages,
    }
  }

  #chiSquaredAt(parameters: Float64Array, into: Float64Array): number {
    if (!this.#evaluate(parameters, into, null)) return Number.POSITIVE_INFINITY
    const sum = sumOfSquares(into)
    return Number.isFinite(sum) ? sum : Number.POSITIVE_INFINITY
  }

  /** Leaves R and Qᵀr of the Jacobian behind, and the greatest lengths of its columns so far. */
  #linearise(parameters: Float64Array, lengths: Float64Array): void {
    const [count, size, jacobian] = [this.#count, this.#size, this.#jacobian]
    this.#evaluate(parameters, this.#right, jacobian)
    triangulate(jacobian, count, size, this.#right)
    for (let j = 0; j < size; j++) {
      let squares = 0
      for (let i = 0; i <= Math.min(j, count - 1); i++) squares += (jacobian[i * size + j] as number) ** 2
      lengths[j] = Math.max(lengths[j] as number, Math.sqrt(squares)) || 1 / (this.#scales[j] as number)
    }
  }

  /** The step that minimises |r + Jδ|² + λ|Dδ|²; returns by how much |r + Jδ|² then is below |r|². */
  #dampedStep(damping: number, lengths: Float64Array): number {
    const size = this.#size
    const [damped, right] = [this.#damped, this.#dampedRight]
    damped.set(this.#jacobian.subarray(0, size * size))
    damped.fill(0, size * size)
    right.fill(0)
    for (let j = 0; j < size; j++) {
      damped[(size + j) * size + j] = Math.sqrt(damping) * (lengths[j] as number)
      right[j] = -(this.#right[j] as number)
    }
    triangulate(damped, 2 * size, size, right)
    solveTriangle(damped, size, right, this.#step)
    let gained = 0
    for (let j = 0; j < size; j++) {
      const step = this.#step[j] as number
      let along = 0
      for (let i = j; i < size; i++)
        along += (this.#jacobian[j * size + i] as number) * (this.#step[i] as number)
      gained += along * along + 2 * damping * ((lengths[j] as number) * step) ** 2
    }
    return gained
  }

  #isTooLong(parameters: Float64Array): boolean {
    return this.#step.some(
      (step, j) =>
        Math.abs(step) >
        LONGEST_STEP * Math.max(Math.abs(parameters[j] as number), this.#scales[j] as number),
    )
  }

  #isTiny(parameters: Float64Array): boolean {
    return this.#step.every(
      (step, j) =>
        Math.abs(step) <= 1e-13 * (Math.abs(parameters[j] as number) + (this.#scales[j] as number)),
    )
  }
}

function requireStarts(starts: readonly (readonly number[])[]): number {
  const size = starts[0]?.length ?? 0
  if (size === 0) throw new RangeError('starts must hold at least one set of parameters')
  starts.forEach((start, i) => {
    if (start.length !== size) throw new RangeError(`starts[${i}] must have ${size} parameters`)
    if (!start.every(Number.isFinite)) throw new RangeError(`starts[${i}] must be finite numbers`)
  })
  return size
}

function sumOfSquares(values: Float64Array): number {
  let sum = 0
  for (let i = 0; i < values.length; i++) sum += (values[i] as number) ** 2
  return sum
}
