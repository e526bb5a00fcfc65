import type { BenchState } from '#app/protocol/messages.ts'
import { interlockChain } from '#app/safety/chain.ts'
import { type Machine, warningsOf } from '#app/safety/machine.ts'
import type { BenchView, OutputView } from '#app/safety/view.ts'
import type { Apparatus } from './apparatus.ts'
import type { Controls } from './controls.ts'
import { portStatuses } from './instrument-set.ts'

type StateParts = {
  benchId: string
  machine: Machine
  view: BenchView
  apparatus: Apparatus | null
  controls: Controls
  shutdown: BenchState['shutdown']
  /** Seconds since 1970 of a time of the bridge's clock. */
  wallOf: (at: number) => number
  notes: readonly string[]
}

const output = (view: OutputView, limit: number): BenchState['heater'] => ({
  asked: view.asked,
  commanded: view.commanded,
  limit,
  on: view.on,
})

/** The bench as the pages see it. */
export function benchState(parts: StateParts): BenchState {
  const { machine, view, apparatus, wallOf } = parts
  const limits = apparatus?.safety.limits
  const measured = apparatus?.anodeMeasured ?? null
  return {
    benchId: parts.benchId,
    revision: apparatus?.config.revision ?? null,
    phase: machine.phase,
    since: wallOf(machine.since),
    heater: output(view.outputs.heater, limits?.heaterVolts.high ?? 0),
    anode: output(view.outputs.anode, limits?.anodeVolts ?? 0),
    coils: output(view.outputs.coils, limits?.coilAmps ?? 0),
    polarity: apparatus?.outputs.polarity ?? 1,
    polarityChanging: view.polarityChanging,
    warmUp: {
      elapsedSeconds: Math.min(machine.warmUp.elapsedSeconds, limits?.warmUpSeconds ?? 0),
      requiredSeconds: limits?.warmUpSeconds ?? 0,
    },
    contacts: interlockChain(view, machine.warmUp, machine.trip),
    trip: machine.trip,
    shutdown: parts.shutdown,
    anodeMeasured: measured && { volts: measured.volts, at: wallOf(measured.at) },
    controls: controlsState(parts),
    ports: portStatuses(apparatus?.instruments ?? null),
    channels: apparatus ? apparatus.statuses.all(view.at, apparatus.values, view.outputs) : {},
    warnings: [...warningsOf(machine, view, measured), ...parts.notes],
  }
}

function controlsState({ controls, apparatus, view, wallOf }: StateParts): BenchState['controls'] {
  const { holder } = controls
  const seen = controls.presence(apparatus?.config.limits.deadManMinutes ?? 1)
  if (holder === null || seen === null) return null
  return {
    personId: holder.personId,
    name: holder.name,
    role: holder.role,
    since: wallOf(holder.since),
    presentUntil: wallOf(view.at + seen.until - seen.now),
    warned: seen.warned,
  }
}
