import type { InstrumentName, SimulatedBench } from '#bridge/simulator/bench.ts'
import type { FaultName } from '#bridge/simulator/model/faults.ts'
import { demoScenario, type Scenario } from '#bridge/simulator/scenario.ts'
import { createSimulator, type Simulator } from '#bridge/simulator/simulator.ts'

export type Terminal = { anodeVolts: number; coilAmps: number; heaterVolts: number; atSeconds: number }

/** One simulated bench on a clock that stands still until it is moved. */
export type Workbench = {
  simulator: Simulator
  bench: SimulatedBench
  clock: { seconds: number; now(): number }
  wait(seconds: number): void
  /** Sends a program message and gives the answer, or null where there is none. */
  say(instrument: InstrumentName, message: string): string | null
  /** The numbers of an answer, whatever stands between them. */
  measure(instrument: InstrumentName, message: string): number[]
  /** An ask of the test socket; throws where it is refused. */
  ask<T>(ask: string, values?: Record<string, unknown>): T
  fault(name: FaultName, on: boolean, value?: number): void
  terminal(): Terminal
  /** Heater on and warm, then anode and coils on at these values and settled. */
  bringUp(volts: number, amps: number): void
}

export function createWorkbench(
  options: { scenario?: Scenario; seed?: number; benchId?: string } = {},
): Workbench {
  const { scenario = demoScenario, seed = 1, benchId = 'bench-1' } = options
  const clock = {
    seconds: 0,
    now() {
      return this.seconds
    },
  }
  const simulator = createSimulator({ scenario, seed, clock })
  const bench = simulator.bench(benchId)
  const workbench: Workbench = {
    simulator,
    bench,
    clock,
    wait(seconds) {
      clock.seconds += seconds
    },
    say(instrument, message) {
      const device = bench.instrument(instrument)
      device.write(message)
      return device.hasAnswer ? device.read() : null
    },
    measure(instrument, message) {
      return (workbench.say(instrument, message) ?? '').split(/[,;]/).map(Number)
    },
    ask<T>(ask: string, values: Record<string, unknown> = {}) {
      const reply = simulator.ask({ id: 1, ask, bench: benchId, ...values })
      if (!reply.ok) throw new Error(reply.reason)
      return reply.answer as T
    },
    fault(name, on, value) {
      workbench.ask('fault', value === undefined ? { name, on } : { name, on, value })
    },
    terminal: () => workbench.ask<Terminal>('terminal'),
    bringUp(volts, amps) {
      workbench.say('supply', 'VOLT 6.3,(@1);:OUTP ON,(@1)')
      workbench.wait(15)
      workbench.say('supply', `VOLT ${volts},(@2);:CURR ${amps},(@3);:OUTP ON,(@2,3)`)
      workbench.wait(2)
    },
  }
  return workbench
}
