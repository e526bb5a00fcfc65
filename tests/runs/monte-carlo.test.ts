import { describe, expect, it } from 'vitest'
import type { Reading } from '#app/analysis/reading.ts'
import { readingBudget } from '#app/analysis/reading.ts'
import { readingProblem } from '#app/analysis/reading-model.ts'
import { propagate } from '#app/metrology/monte-carlo.ts'
import type { MonteCarloProblem, MonteCarloReport } from '#app/runs/monte-carlo.ts'
import { monteCarloSession } from '#app/runs/monte-carlo.ts'
import { studentQuantile } from '#app/statistics/distributions.ts'
import { bottomGun } from '#tests/analysis/benches.ts'
import { expectNear } from '#tests/support/near.ts'

const reading: Reading = {
  voltageVolts: 250,
  uVoltageVolts: 0.03,
  currentAmps: 1.3,
  uCurrentAmps: 0.0004,
  leftEdges: [-0.0612],
  rightEdges: [0.0605],
  edgeSpread: { standardDeviationMetres: 0.0005, degreesOfFreedom: 11 },
}
const problem: MonteCarloProblem = { kind: 'reading', bench: bottomGun, reading }

/** A session whose turns the test takes itself. */
function session() {
  const reports: MonteCarloReport[] = []
  const tasks: (() => void)[] = []
  const ask = monteCarloSession(
    // What a worker posts arrives as a copy.
    (report) => reports.push(structuredClone(report)),
    (task) => tasks.push(task),
  )
  const turn = () => tasks.shift()?.()
  const runOut = () => {
    while (tasks.length > 0) turn()
  }
  return { reports, ask: (request: Parameters<typeof ask>[0]) => ask(structuredClone(request)), turn, runOut }
}

function last(reports: MonteCarloReport[]): Extract<MonteCarloReport, { type: 'done' }> {
  const report = reports.at(-1)
  if (report?.type !== 'done') throw new Error(`the last report is ${report?.type}`)
  return report
}

describe('Monte Carlo in a worker', () => {
  it('reports block by block, then the result that the same seed gives without a worker', () => {
    const { reports, ask, runOut } = session()
    ask({ type: 'start', problem, seed: 8, digits: 1 })
    expect(reports).toEqual([])
    runOut()
    const samples = reports.map((report) => (report.type === 'progress' ? report.samples : 0))
    expect(samples.slice(0, -1)).toEqual(samples.slice(0, -1).map((_, i) => (i + 1) * 10_000))
    const { result, firstOrder } = last(reports)
    const direct = propagate({
      ...readingProblem({ ...reading, bench: bottomGun }),
      seed: 8,
      digits: 1,
    })
    expect(result.isStable).toBe(true)
    expect(result.samples).toBe(direct.samples)
    expectNear(result.mean, direct.mean, { rel: 1e-12 })
    const budget = readingBudget({ ...reading, bench: bottomGun })
    expectNear(firstOrder.value, budget.value, { rel: 1e-12 })
    expectNear(firstOrder.expandedUncertainty, budget.expandedUncertainty, { rel: 1e-7 })
  })

  it('has every trial in the histogram of its progress', () => {
    const { reports, ask, turn } = session()
    ask({ type: 'start', problem, seed: 1 })
    turn()
    turn()
    const report = reports[1]
    if (report?.type !== 'progress') throw new Error('no progress')
    const { counts, below, above } = report.histogram
    expect(counts.reduce((a, b) => a + b, below + above)).toBe(20_000)
    expect(report.histogram.low).toBeLessThan(report.mean)
  })

  it('stops between two blocks with the result so far, and says no more', () => {
    const { reports, ask, turn, runOut } = session()
    ask({ type: 'start', problem, seed: 1 })
    turn()
    turn()
    ask({ type: 'stop' })
    expect(last(reports).result).toMatchObject({ samples: 20_000, isStable: false })
    runOut()
    ask({ type: 'stop' })
    expect(reports.map(({ type }) => type)).toEqual(['progress', 'progress', 'done'])
  })

  it('has a result also where it is stopped before the first block', () => {
    const { reports, ask } = session()
    ask({ type: 'start', problem, seed: 1 })
    ask({ type: 'stop' })
    expect(last(reports).result.samples).toBe(10_000)
  })

  it('leaves what is running for a new start', () => {
    const { reports, ask, turn, runOut } = session()
    ask({ type: 'start', problem, seed: 1, digits: 1 })
    turn()
    ask({ type: 'start', problem, seed: 2, digits: 1 })
    runOut()
    expect(reports.filter(({ type }) => type === 'done')).toHaveLength(1)
    const alone = session()
    alone.ask({ type: 'start', problem, seed: 2, digits: 1 })
    alone.runOut()
    expect(last(reports)).toEqual(last(alone.reports))
  })

  it('propagates the mean of a series', () => {
    const { reports, ask, turn } = session()
    const readings = [reading, { ...reading, voltageVolts: 240 }]
    ask({ type: 'start', problem: { kind: 'series', bench: bottomGun, readings }, seed: 3 })
    turn()
    ask({ type: 'stop' })
    const mean =
      readings.map((of) => readingBudget({ ...of, bench: bottomGun }).value).reduce((a, b) => a + b) / 2
    const { firstOrder, result } = last(reports)
    expectNear(firstOrder.value, mean, { rel: 1e-12 })
    expectNear(result.mean, mean, { rel: 0.01 })
  })

  it('knows a pooled spread no better for many readings', () => {
    const { reports, ask } = session()
    const pooled = { standardDeviationMetres: 0.01, degreesOfFreedom: 11 }
    const readings = Array.from({ length: 9 }, (): Reading => ({ ...reading, edgeSpread: pooled }))
    ask({ type: 'start', problem: { kind: 'series', bench: bottomGun, readings }, seed: 3 })
    ask({ type: 'stop' })
    const { coverageFactor } = last(reports).firstOrder
    // Nearly all of the uncertainty is the spread's: t(11), not t(99).
    expect(coverageFactor).toBeGreaterThan(2.1)
    expect(coverageFactor).toBeLessThan(studentQuantile(0.975, 11))
  })

  it('refuses with the reason', () => {
    const { reports, ask, runOut } = session()
    const two = { standardDeviationMetres: 0.0005, degreesOfFreedom: 1 }
    ask({ type: 'start', problem: { ...problem, reading: { ...reading, edgeSpread: two } }, seed: 1 })
    ask({ type: 'start', problem: { kind: 'series', bench: bottomGun, readings: [] }, seed: 1 })
    // So wide that the edges change places in some trial.
    const wide = { standardDeviationMetres: 0.06, degreesOfFreedom: 30 }
    ask({ type: 'start', problem: { ...problem, reading: { ...reading, edgeSpread: wide } }, seed: 1 })
    runOut()
    expect(reports).toEqual([
      { type: 'refused', reason: expect.stringContaining('edgeSpread') },
      { type: 'refused', reason: 'readings must not be empty' },
      { type: 'refused', reason: expect.stringContaining('radiusMetres') },
    ])
  })
})
