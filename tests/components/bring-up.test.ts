import { describe, expect, it } from 'vitest'
import { nextStep } from '#app/components/bench/bring-up.ts'
import { demoBenches } from '#app/db/demo-benches.ts'
import type { BenchState } from '#app/protocol/messages.ts'
import { edgesBy, liveState, readingView } from './bench-state.ts'

const [bench] = demoBenches
if (!bench) throw new Error('The demo has no bench')
const readAt = (edges: typeof bench.tube.edges, scale: typeof bench.scale = bench.scale) => ({
  tube: { ...bench.tube, edges },
  scale,
})

const off = { asked: 0, commanded: 0, limit: 300, on: false }

function step(changes: Partial<BenchState> = {}, rest: Partial<Parameters<typeof nextStep>[0]> = {}) {
  return nextStep({
    state: liveState(changes),
    cautionsAcknowledged: true,
    personId: 'p1',
    readings: [],
    bench: readAt('outer'),
    ...rest,
  })
}

describe('the next step of the bring-up', () => {
  it('begins with the cautions, whatever the bench is doing', () => {
    expect(step({}, { cautionsAcknowledged: false })?.name).toBe('Acknowledge the cautions')
  })

  it('then asks for the controls, and names who has them', () => {
    expect(step({ controls: null })?.name).toBe('Take the controls')
    expect(step({}, { personId: 'p2' })?.why).toContain('Kofi Adeyemi has them')
  })

  it('goes through heater, warm-up, anode and coils in that order', () => {
    const cold = { heater: off, anode: off, coils: off, warmUp: { elapsedSeconds: 0, requiredSeconds: 10 } }
    expect(step(cold)?.name).toBe('Switch the heater on')
    expect(step({ ...cold, heater: liveState().heater })?.name).toBe('Wait for the warm-up')
    expect(step({ anode: off, coils: off })?.name).toBe('Set the anode voltage')
    expect(step({ coils: off })?.name).toBe('Set the coil current')
  })

  it('waits for the channel that is not settled and says why it is not', () => {
    const { channels } = liveState()
    const drifting = { state: 'drifting', mean: 1.5, standardDeviation: 0, driftPerSecond: 0.1 } as const
    const waiting = step({ channels: { ...channels, coilAmps: { ...drifting, reason: '3 mA per second' } } })
    expect(waiting).toMatchObject({
      name: 'Wait until settled',
      why: 'The coil current is drifting: 3 mA per second.',
    })
  })

  it('offers the capture once both are settled', () => {
    expect(step()?.name).toBe('Capture')
  })

  it('asks for the edges of a reading at this setting, from each person for themselves', () => {
    expect(step({}, { readings: [readingView()] })?.name).toBe('Read the edges')
    expect(step({}, { readings: [readingView({ edges: [edgesBy('p2')] })] })?.name).toBe('Read the edges')
    expect(step({}, { readings: [readingView({ edges: [edgesBy('p1')] })] })?.name).toBe('Capture')
  })

  it('says which edges are read at this bench', () => {
    const why = (edges: 'outer' | 'inner' | 'middle') =>
      step({}, { readings: [readingView()], bench: readAt(edges) })?.why
    expect(why('outer')).toContain('Read the outer edges of the beam, left and right, off the scale')
    expect(why('inner')).toContain('Read the inner edges of the beam, left and right, off the scale')
    expect(why('middle')).toContain('Read the centre line of the beam, left and right, off the scale')
  })

  it('asks for the rung where the bench has rungs, and says what has to meet it', () => {
    const rungs = {
      kind: 'rungs',
      rungs: [{ name: '8 cm', distanceMetres: 0.08 }],
      uDistanceMetres: 0.0002,
    } as const
    const at = { bench: readAt('outer', { ...rungs, rungs: [...rungs.rungs] }) }
    expect(step({}, { ...at, readings: [readingView()] })?.why).toBe(
      'Reading 1 has no rung. Choose the one that the beam meets: outer edge of the beam on the rung.',
    )
    expect(step({ coils: off }, at)?.why).toContain('meets a rung')
  })

  it('does not ask for edges that can no longer be seen, nor for those of a struck reading', () => {
    expect(step({}, { readings: [readingView({ anodeVolts: 150 })] })?.name).toBe('Capture')
    const struck = { reason: 'knocked', by: 'p1', at: '2026-11-03T14:01:00.000Z' }
    expect(step({}, { readings: [readingView({ struck })] })?.name).toBe('Capture')
  })

  it('is silent while a trip, a lost line or a missing commissioning has the word', () => {
    for (const phase of ['tripped', 'lost', 'unconfigured'] as const) expect(step({ phase })).toBeNull()
  })
})
