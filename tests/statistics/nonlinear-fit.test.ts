import { describe, expect, it } from 'vitest'
import { fitNonlinear } from '#app/statistics/nonlinear-fit.ts'
import { expectNear } from '#tests/support/near.ts'

// NIST StRD, nonlinear regression, Misra1a: y = b1(1 − exp(−b2 x)). Data, starts and certified values from memory; that they
// belong together is what the test shows.
const x = [77.6, 114.9, 141.1, 190.8, 239.9, 289, 332.8, 378.4, 434.8, 477.3, 536.8, 593.1, 689.1, 760]
const y = [10.07, 14.73, 17.94, 23.93, 29.61, 35.18, 40.02, 44.82, 50.76, 55.05, 61.01, 66.4, 75.47, 81.78]

function residuals(parameters: Float64Array, into: Float64Array, jacobian: Float64Array | null): boolean {
  const [b1 = 0, b2 = 0] = parameters
  x.forEach((xi, i) => {
    const decay = Math.exp(-b2 * xi)
    into[i] = b1 * (1 - decay) - (y[i] as number)
    if (!jacobian) return
    jacobian[2 * i] = 1 - decay
    jacobian[2 * i + 1] = b1 * xi * decay
  })
  return true
}

describe('A nonlinear fit', () => {
  it.each([
    [500, 0.0001],
    [250, 0.0005],
  ])('has the certified values of NIST StRD Misra1a from the start %s, %s', (b1, b2) => {
    const fit = fitNonlinear({ residuals, count: x.length, starts: [[b1, b2]] })
    expect(fit.isConverged).toBe(true)
    expectNear(fit.parameters[0] as number, 2.3894212918e2, { rel: 1e-9 })
    expectNear(fit.parameters[1] as number, 5.5015643181e-4, { rel: 1e-9 })
    expectNear(fit.chiSquared, 1.2455138894e-1, { rel: 1e-9 })
    // The certified deviations are scaled by the residuals.
    const scale = Math.sqrt(fit.chiSquared / fit.degreesOfFreedom)
    expectNear((fit.errors[0] as number) * scale, 2.7070075241, { rel: 1e-8 })
    expectNear((fit.errors[1] as number) * scale, 7.2668688436e-6, { rel: 1e-8 })
    expectNear(
      fit.leverages.reduce((sum, leverage) => sum + leverage, 0),
      2,
      { rel: 1e-9 },
    )
  })

  it('takes the best of several starts, and passes over one at which the model has no value', () => {
    const withHole: typeof residuals = (parameters, into, jacobian) =>
      (parameters[1] as number) > 0 && residuals(parameters, into, jacobian)
    const fit = fitNonlinear({
      residuals: withHole,
      count: x.length,
      starts: [
        [500, -1],
        [250, 0.0005],
      ],
    })
    expectNear(fit.parameters[0] as number, 2.3894212918e2, { rel: 1e-9 })
  })

  it('is refused for fewer residuals than parameters, for no start, and where a parameter does not show', () => {
    expect(() => fitNonlinear({ residuals, count: 1, starts: [[1, 1]] })).toThrow(/^count/)
    expect(() => fitNonlinear({ residuals, count: 5, starts: [] })).toThrow(/^starts/)
    const flat: typeof residuals = (parameters, into, jacobian) => {
      for (let i = 0; i < 5; i++) {
        into[i] = (parameters[0] as number) - i
        if (jacobian) jacobian.set([1, 0], 2 * i)
      }
      return true
    }
    expect(() => fitNonlinear({ residuals: flat, count: 5, starts: [[1, 1]] })).toThrow(
      /^residuals must determine/,
    )
  })
})
