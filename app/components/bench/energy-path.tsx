import type { BenchView } from '#app/benches/bench-view.server.ts'
import type { BenchState } from '#app/protocol/messages.ts'
import { hazardousVolts } from '#app/safety/types.ts'
import { useBridgeSeconds, useLatest, useLink } from '#app/telemetry/telemetry.tsx'
import { fixed } from '../figures.ts'
import { ContactChain } from './contact-chain.tsx'
import { whatStops } from './contact-words.ts'
import { HeaterSwitch } from './heater-switch.tsx'
import { PolaritySwitch } from './polarity-switch.tsx'
import { SetpointControl } from './setpoint-control.tsx'
import { setpointProgress } from './setpoint-progress.ts'
import { Stage } from './stage.tsx'

type Props = { view: BenchView; state: BenchState; isAtControls: boolean }

/** The path that the energy takes: heater, the interlock chain, anode, coils. What stops the anode stands below it. */
export function EnergyPath({ view, state, isAtControls }: Props) {
  return (
    <section
      aria-label="Energy path"
      className="grid gap-y-4 border-x-[3px] border-ink py-1 sm:grid-cols-2 md:grid-cols-3 xl:grid-cols-[200px_minmax(0,1fr)_minmax(250px,19%)_minmax(250px,19%)]"
    >
      <HeaterStage view={view} state={state} isAtControls={isAtControls} />
      <div className="grid min-w-0 content-start gap-y-2 px-4 sm:max-xl:col-span-full sm:max-xl:row-start-2 xl:px-0">
        <ContactChain contacts={state.contacts} />
        <WhatStops state={state} />
      </div>
      <AnodeStage view={view} state={state} isAtControls={isAtControls} />
      <CoilStage view={view} state={state} isAtControls={isAtControls} />
    </section>
  )
}

/** What is stopping me, in one sentence. Room for two lines is kept, so that nothing below moves with its length. */
function WhatStops({ state }: { state: BenchState }) {
  const isLinked = useLink().kind === 'connected'
  const { permit, why } = whatStops(state, { isLinked })
  return (
    <p className="leading-snug xl:min-h-[2.75em]">
      <b className="font-medium">{permit}</b> {why}
    </p>
  )
}

/** The newest reading of a channel, or null when it is older than a live channel may be. */
function useFresh(benchId: string, channel: Parameters<typeof useLatest>[1]): number | null {
  const latest = useLatest(benchId, channel)
  const now = useBridgeSeconds()
  if (!latest || (now !== null && now - latest.seconds > 2)) return null
  return latest.value
}

function HeaterStage({ view, state, isAtControls }: Props) {
  const volts = useFresh(state.benchId, 'heaterVolts')
  const { elapsedSeconds, requiredSeconds } = state.warmUp
  const elapsed = Math.floor(Math.min(elapsedSeconds, requiredSeconds))
  const clock = (seconds: number) =>
    `${Math.floor(seconds / 60)}:${String(Math.floor(seconds % 60)).padStart(2, '0')}`
  return (
    <Stage
      title="Heater"
      aside={state.heater.on ? 'on' : 'off'}
      value={volts}
      unit="V"
      decimals={2}
      gauge={{ label: 'Warm-up', value: elapsed, max: requiredSeconds, unit: 's' }}
    >
      <p className="mt-1 text-[12.5px] text-ink-soft">
        warm {clock(elapsed)} of {clock(requiredSeconds)}
      </p>
      {isAtControls && <HeaterSwitch benchId={view.bench.id} isOn={state.heater.on} />}
    </Stage>
  )
}

/** With a line lost the anode can be measured and still not be commanded: it stays to be treated as live. */
function anodeHazard(volts: number | null, phase: BenchState['phase']): string | null {
  if (volts === null) return 'treat as live'
  if (Math.abs(volts) > hazardousVolts) return 'hazardous'
  return phase === 'lost' ? 'treat as live' : null
}

function AnodeStage({ view, state, isAtControls }: Props) {
  const volts = useFresh(state.benchId, 'anodeVolts')
  const { limits } = view.bench.config
  const progress = setpointProgress({
    setpoint: state.anode,
    measured: volts,
    tolerance: limits.readBack.anodeVolts,
    unit: 'V',
    decimals: 1,
  })
  return (
    <Stage
      title="Anode"
      aside={`limit ${fixed(state.anode.limit, 0)} V`}
      value={volts}
      unit="V"
      decimals={1}
      hazard={anodeHazard(volts, state.phase)}
      gauge={{
        label: 'Anode voltage',
        value: volts ?? 0,
        mark: state.anode.asked,
        max: state.anode.limit,
        unit: 'V',
      }}
    >
      {isAtControls ? (
        <SetpointControl
          benchId={view.bench.id}
          kind="set-anode"
          field="volts"
          label="Anode voltage"
          unit="V"
          decimals={1}
          step={5}
          setpoint={state.anode}
          progress={progress}
        />
      ) : (
        <p className="mt-1 text-[12.5px] text-ink-soft">{progress}</p>
      )}
    </Stage>
  )
}

function CoilStage({ view, state, isAtControls }: Props) {
  const amps = useFresh(state.benchId, 'coilAmps')
  const { limits, reversal } = view.bench.config
  const progress = setpointProgress({
    setpoint: state.coils,
    measured: amps === null ? null : Math.abs(amps),
    tolerance: limits.readBack.coilAmps,
    unit: 'A',
    decimals: 3,
  })
  return (
    <Stage
      title="Coils"
      aside={`limit ${fixed(state.coils.limit, 2)} A`}
      value={amps}
      unit="A"
      decimals={3}
      gauge={{
        label: 'Coil current',
        value: Math.abs(amps ?? 0),
        mark: state.coils.asked,
        max: state.coils.limit,
        unit: 'A',
      }}
    >
      {isAtControls ? (
        <SetpointControl
          benchId={view.bench.id}
          kind="set-coils"
          field="amps"
          label="Coil current"
          unit="A"
          decimals={3}
          step={0.05}
          setpoint={state.coils}
          progress={progress}
        />
      ) : (
        <p className="mt-1 text-[12.5px] text-ink-soft">{progress}</p>
      )}
      {reversal === 'coils-only' && (
        <PolaritySwitch
          benchId={view.bench.id}
          polarity={state.polarity}
          isChanging={state.polarityChanging}
          isAtControls={isAtControls}
        />
      )}
    </Stage>
  )
}
