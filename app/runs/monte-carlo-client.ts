import type { MonteCarloReport, MonteCarloRequest } from './monte-carlo.ts'

/**
 * Starts a Monte Carlo propagation in a worker of its own.
 *
 * @param onReport is told of the progress, the result or the refusal
 * @returns `stop` asks for the result so far; `close` ends the worker, after which nothing is reported
 */
export function startMonteCarlo(
  start: Omit<Extract<MonteCarloRequest, { type: 'start' }>, 'type'>,
  onReport: (report: MonteCarloReport) => void,
): { stop: () => void; close: () => void } {
  const worker = new Worker(new URL('./monte-carlo-worker.ts', import.meta.url), { type: 'module' })
  const ask = (request: MonteCarloRequest) => worker.postMessage(request)
  worker.addEventListener('message', ({ data }: MessageEvent<MonteCarloReport>) => {
    if (data.type !== 'progress') worker.terminate()
    onReport(data)
  })
  ask({ type: 'start', ...start })
  return { stop: () => ask({ type: 'stop' }), close: () => worker.terminate() }
}
