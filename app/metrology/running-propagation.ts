import { RunningMoments } from '#app/statistics/moments.ts'
import { RandomNumbers } from '#app/statistics/random.ts'
import { type BudgetInput, requireInput } from './budget.ts'
import { type Correlation, correlatedPairs } from './correlations.ts'
import { type Interval, shortestInterval, sortTails, symmetricInterval } from './coverage-interval.ts'
import { countInto, type Histogram, histogramAbout } from './histogram.ts'
import { numericalTolerance } from './numerical-tolerance.ts'
import { inputSampler } from './sampling.ts'

export type PropagationSettings = {
  correlations?: readonly Correlation[]
  /** so many trials, instead of as many as `digits` takes */
  samples?: number
  /** significant digits of the standard uncertainty to which all figures are to be stable; 2 by default */
  digits?: 1 | 2
  /** whole number from 0 to 2⁵³ − 1; the same seed gives the same result */
  seed: number
  /** 0.95 by default */
  coverageProbability?: number
}

/** A model that takes its values as a list, in the order of the inputs. */
export type RowPropagationProblem = PropagationSettings & {
  names: readonly string[]
  inputs: readonly BudgetInput[]
  /** is given the same array each time, with other values, and must not keep it */
  evaluate: (row: Float64Array) => number
}

export type Propagation = {
  mean: number
  standardUncertainty: number
  shortestInterval: Interval
  /** with equal probabilities on both sides */
  symmetricInterval: Interval
  coverageProbability: number
  samples: number
  /** whether all figures are stable to the digits; null for a given number of samples */
  isStable: boolean | null
  histogram: Histogram
}

export type PropagationProgress = Pick<Propagation, 'mean' | 'standardUncertainty' | 'samples' | 'histogram'>

const LEAST_BLOCK = 10_000
const LEAST_SAMPLES = 100
const MOST_SAMPLES = 10_000_000
/** Two blocks can agree by chance. */
const LEAST_BLOCKS = 10
const MOST_ADAPTIVE_SAMPLES = 5_000_000
const MOST_PROBABILITY = 0.999

/** A propagation under way: `advance` until `isDone`, or stop whenever there is enough. */
export class RunningPropagation {
  readonly #evaluate: RowPropagationProblem['evaluate']
  readonly #sample: ReturnType<typeof inputSampler>
  readonly #probability: number
  readonly #digits: number
  readonly #wanted: number | null
  readonly #blockLength: number
  readonly #columns: Float64Array
  readonly #row: Float64Array
  readonly #blocks: Float64Array[] = []
  readonly #spread = Array.from({ length: 4 }, () => new RunningMoments())
  #samples = 0
  #mean = 0
  #squares = 0
  #histogram: Histogram | null = null
  #isStable = false

  constructor(problem: RowPropagationProblem) {
    const { names, inputs, correlations = [], samples, digits = 2, coverageProbability = 0.95 } = problem
    requireProblem(problem)
    // As many as leave a hundred outside the interval (JCGM 101:2008, 7.9.4 b).
    this.#blockLength = Math.max(LEAST_BLOCK, Math.ceil(100 / (1 - coverageProbability)))
    this.#evaluate = problem.evaluate
    this.#probability = coverageProbability
    this.#digits = digits
    this.#wanted = samples ?? null
    this.#columns = new Float64Array(inputs.length * this.#blockLength)
    this.#row = new Float64Array(inputs.length)
    this.#sample = inputSampler({
      names,
      inputs,
      pairs: correlatedPairs(names, correlations),
      blockLength: this.#blockLength,
      random: new RandomNumbers(problem.seed),
    })
  }

  get samples(): number {
    return this.#samples
  }

  get isDone(): boolean {
    if (this.#wanted !== null) return this.#samples >= this.#wanted
    return this.#isStable || this.#samples + this.#blockLength > MOST_ADAPTIVE_SAMPLES
  }

  /** Runs one more block of trials; nothing once it is done. */
  advance(): void {
    if (this.isDone) return
    const trials = Math.min(this.#blockLength, (this.#wanted ?? Number.POSITIVE_INFINITY) - this.#samples)
    const block = this.#runTrials(trials)
    const summary = meanAndSquares(block)
    this.#add(block, summary)
    this.#blocks.push(block)
    if (this.#wanted === null) this.#judge(block, summary)
  }

  /** @throws RangeError naming `samples` before the first block */
  get progress(): PropagationProgress {
    if (!this.#histogram) throw new RangeError('samples must be above 0: no block has been run yet')
    return {
      mean: this.#mean,
      standardUncertainty: Math.sqrt(this.#squares / (this.#samples - 1)),
      samples: this.#samples,
      histogram: { ...this.#histogram, counts: [...this.#histogram.counts] },
    }
  }

  /** What the blocks so far give. @throws RangeError naming `samples` before the first block */
  result(): Propagation {
    const { progress } = this
    const sorted = new Float64Array(this.#samples)
    let filled = 0
    for (const block of this.#blocks) {
      sorted.set(block, filled)
      filled += block.length
    }
    sortTails(sorted, this.#probability)
    return {
      ...progress,
      shortestInterval: shortestInterval(sorted, this.#probability),
      symmetricInterval: symmetricInterval(sorted, this.#probability),
      coverageProbability: this.#probability,
      isStable: this.#wanted === null ? this.#isStable : null,
    }
  }

  #runTrials(trials: number): Float64Array {
    const [columns, row, length, evaluate] = [this.#columns, this.#row, this.#blockLength, this.#evaluate]
    this.#sample(columns, trials)
    const block = new Float64Array(trials)
    for (let trial = 0; trial < trials; trial++) {
      for (let i = 0; i < row.length; i++) row[i] = columns[i * length + trial] as number
      const value = evaluate(row)
      if (!Number.isFinite(value)) {
        throw new RangeError(`model must be finite for all that the inputs may be, gave ${value}`)
      }
      block[trial] = value
    }
    return block
  }

  /** Joins the block's mean and sum of squares with those so far. */
  #add(block: Float64Array, { mean, squares }: Summary): void {
    const count = block.length
    this.#histogram ??= histogramAbout(mean, Math.sqrt(squares / (count - 1)))
    countInto(this.#histogram, block)
    const all = this.#samples + count
    const delta = mean - this.#mean
    this.#squares += squares + delta * delta * (this.#samples / all) * count
    this.#mean += delta * (count / all)
    this.#samples = all
  }

  /** JCGM 101:2008, 7.9.4: twice the standard deviation of each average over the blocks against the tolerance. */
  #judge(block: Float64Array, { mean, squares }: Summary): void {
    sortTails(block, this.#probability)
    const figures = [
      mean,
      Math.sqrt(squares / (block.length - 1)),
      ...shortestInterval(block, this.#probability),
    ]
    figures.forEach((figure, i) => {
      this.#spread[i]?.add(figure)
    })
    const count = this.#blocks.length
    if (count < LEAST_BLOCKS) return
    const tolerance = numericalTolerance(Math.sqrt(this.#squares / (this.#samples - 1)), this.#digits)
    this.#isStable = this.#spread.every(
      ({ standardDeviation }) => (2 * standardDeviation) / Math.sqrt(count) <= tolerance,
    )
  }
}

function requireProblem(problem: RowPropagationProblem): void {
  const { names, inputs, samples, digits = 2, coverageProbability = 0.95 } = problem
  if (inputs.length === 0) throw new RangeError('inputs must not be empty')
  if (names.length !== inputs.length) {
    throw new RangeError(`names must be as many as inputs (${inputs.length}), got ${names.length}`)
  }
  inputs.forEach((input, i) => {
    requireInput(names[i] as string, input)
  })
  if (digits !== 1 && digits !== 2) throw new RangeError(`digits must be 1 or 2, got ${digits}`)
  if (!(coverageProbability > 0 && coverageProbability <= MOST_PROBABILITY)) {
    throw new RangeError(
      `coverageProbability must lie between 0 and ${MOST_PROBABILITY}, got ${coverageProbability}`,
    )
  }
  if (samples === undefined) return
  if (!(Number.isInteger(samples) && samples >= LEAST_SAMPLES && samples <= MOST_SAMPLES)) {
    throw new RangeError(
      `samples must be a whole number from ${LEAST_SAMPLES} to ${MOST_SAMPLES}, got ${samples}`,
    )
  }
}

type Summary = { mean: number; squares: number }

function meanAndSquares(values: Float64Array): Summary {
  const origin = values[0] as number
  let sum = 0
  for (let i = 0; i < values.length; i++) sum += (values[i] as number) - origin
  const shift = sum / values.length
  let squares = 0
  for (let i = 0; i < values.length; i++) {
    const deviation = (values[i] as number) - origin - shift
    squares += deviation * deviation
  }
  return { mean: origin + shift, squares }
}
