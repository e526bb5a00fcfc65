import type { ReadingView } from '#app/benches/bench-view.server.ts'
import type { BenchState, ChannelStatus } from '#app/protocol/messages.ts'
import { contactNames } from '#app/safety/types.ts'

const settled = (mean: number, standardDeviation: number): ChannelStatus => ({
  state: 'settled',
  mean,
  standardDeviation,
  driftPerSecond: 0,
  reason: '',
})

/** A live bench at 200 V and 1.5 A with the person p1 at the controls. */
export function liveState(changes: Partial<BenchState> = {}): BenchState {
  const setpoint = (asked: number, limit: number) => ({ asked, commanded: asked, limit, on: true })
  return {
    benchId: 'bench-1',
    revision: 1,
    phase: 'live',
    since: 1000,
    heater: setpoint(6.3, 6.6),
    anode: setpoint(200, 300),
    coils: setpoint(1.5, 2),
    polarity: 1,
    polarityChanging: false,
    warmUp: { elapsedSeconds: 10, requiredSeconds: 10 },
    contacts: contactNames.map((name) => ({ name, closed: true, measured: 'closed', reason: null })),
    trip: null,
    shutdown: null,
    anodeMeasured: { volts: 200, at: 1000 },
    controls: {
      personId: 'p1',
      name: 'Kofi Adeyemi',
      role: 'student',
      since: 900,
      presentUntil: 1600,
      warned: false,
    },
    ports: { supply: 'open' },
    channels: { anodeVolts: settled(200.05, 0.05), coilAmps: settled(1.5003, 0.0004) },
    warnings: [],
    ...changes,
  }
}

/** A reading at 200 V and 1.5 A without edges. */
export function readingView(changes: Partial<ReadingView> = {}): ReadingView {
  return {
    id: 'r1',
    number: 1,
    capturedAt: '2026-11-03T14:00:00.000Z',
    by: 'Kofi Adeyemi',
    revision: 1,
    source: 'measured',
    polarity: 1,
    anodeVolts: 200.04,
    uAnodeVolts: 0.13,
    coilAmps: 1.5001,
    uCoilAmps: 0.002,
    anodeStandardErrorVolts: 0.01,
    coilStandardErrorAmps: 0.0001,
    edges: [],
    photos: [],
    rung: null,
    stated: null,
    result: null,
    struck: null,
    ...changes,
  }
}

export const edgesBy = (personId: string, leftMetres = 0.02, rightMetres = 0.101) => ({
  personId,
  name: personId,
  leftMetres,
  rightMetres,
})
