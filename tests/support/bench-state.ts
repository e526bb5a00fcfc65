import type { BenchState } from '#app/protocol/messages.ts'

/** A bench that is off and well, as the bridge would state it. */
export function offState(benchId: string): BenchState {
  const setpoint = { asked: 0, commanded: 0, limit: 300, on: false }
  return {
    benchId,
    revision: 1,
    phase: 'off',
    since: 0,
    heater: setpoint,
    anode: setpoint,
    coils: setpoint,
    polarity: 1,
    polarityChanging: false,
    warmUp: { elapsedSeconds: 0, requiredSeconds: 10 },
    contacts: [],
    trip: null,
    shutdown: null,
    anodeMeasured: null,
    controls: null,
    ports: {},
    channels: {},
    warnings: [],
  }
}
