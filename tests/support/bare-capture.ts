import type { Capture } from '#app/protocol/commands.ts'

const figures = { standardDeviation: 0, standardError: 0, effectiveCount: 4, count: 4 }

/** A window of bench 1 at 200 V and 1.5 A without its samples, for tests of who may do what with a reading. */
export const bareCapture: Capture = {
  benchId: 'bench-1',
  revision: 1,
  at: 1_780_000_000,
  windowSeconds: 5,
  polarity: 1,
  times: [],
  samples: {},
  statistics: { anodeVolts: { ...figures, mean: 200 }, coilAmps: { ...figures, mean: 1.5 } },
  states: {},
}
