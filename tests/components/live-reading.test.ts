import { describe, expect, it } from 'vitest'
import { readingBench } from '#app/benches/reading-bench.ts'
import { liveReading, sharesSentence } from '#app/components/bench/live-reading.ts'
import { demoBenches } from '#app/db/demo-benches.ts'
import type { BenchState } from '#app/protocol/messages.ts'
import { edgesBy, liveState, readingView } from './bench-state.ts'

const [config] = demoBenches
if (!config) throw new Error('The demo has no bench')
const bench = readingBench(config)

/** Near the orbit that 200 V and 1.5 A give on the first demo bench: a diameter of 8.1 cm. */
const read = readingView({ edges: [edgesBy('p1', 0.02, 0.101)] })

function live(changes: Partial<BenchState> = {}, readings = [read]) {
  return liveReading({ readings, state: liveState(changes), bench, revision: 1 })
}

function at(volts: number, amps: number): Partial<BenchState> {
  const { channels } = liveState()
  const { anodeVolts, coilAmps } = channels
  if (!anodeVolts || !coilAmps) throw new Error('The live state lacks its channels')
  return { channels: { anodeVolts: { ...anodeVolts, mean: volts }, coilAmps: { ...coilAmps, mean: amps } } }
}

describe('the live e/m', () => {
  it('uses the edges of the newest reading that has any and is not struck', () => {
    const struck = { reason: 'knocked', by: 'p1', at: '2026-11-03T14:00:00.000Z' }
    const readings = [
      read,
      readingView({ id: 'r2', number: 2, edges: [edgesBy('p1', 0.03, 0.09)], struck }),
      readingView({ id: 'r3', number: 3 }),
    ]
    expect(live({}, readings)).toMatchObject({ kind: 'result', number: 1 })
  })

  it('follows the voltage while the orbit stands', () => {
    const [a, b] = [live(at(200, 1.5)), live(at(200.5, 1.5))]
    if (a.kind !== 'result' || b.kind !== 'result') throw new Error('No result')
    // e/m goes as V at a given diameter; the relativistic part is below 1e-3 of it.
    expect(b.result.value / a.result.value).toBeCloseTo(200.5 / 200, 5)
  })

  it('asks for new edges once the orbit has moved by more than an edge can be read', () => {
    expect(live(at(200, 1.5)).kind).toBe('result')
    // r goes as √V/I: 3 % more voltage moves a radius of 40.5 mm by 0.6 mm, and half a millimetre can be read.
    expect(live(at(206, 1.5))).toEqual({
      kind: 'none',
      sentence: 'Read the edges again: the orbit has moved since reading 1.',
    })
    expect(live(at(202, 1.5)).kind).toBe('result')
    expect(live(at(200, 1.53)).kind).toBe('none')
  })

  it('rests on the rung of the newest reading where the bench has rungs, while the current stands', () => {
    const rungs = { ...config, scale: { kind: 'rungs' as const, rungs: [], uDistanceMetres: 0.0002 } }
    const rung = {
      personId: 'p1',
      name: 'Kofi Adeyemi',
      rung: '8 cm',
      settingHalfWidthAmps: 0.01,
      diameterMetres: 0.08,
      uDiameterMetres: 0.0002,
    }
    const readings = [readingView({ rung })]
    const of = (changes: Partial<BenchState> = {}) =>
      liveReading({ readings, state: liveState(changes), bench: readingBench(rungs), revision: 1 })
    expect(of()).toMatchObject({ kind: 'result', source: 'rung', result: { diameterMetres: 0.08 } })
    expect(of(at(200, 1.53))).toMatchObject({
      kind: 'none',
      sentence: expect.stringContaining('Meet a rung'),
    })
  })

  it('asks for new edges after a change of polarity or of the bench', () => {
    expect(live({ polarity: -1 }).kind).toBe('none')
    expect(liveReading({ readings: [read], state: liveState(), bench, revision: 2 }).kind).toBe('none')
  })

  it('says what is missing where there is no beam, no reading or no edges', () => {
    const sentence = (result: ReturnType<typeof live>) => (result.kind === 'none' ? result.sentence : '')
    expect(sentence(live({ phase: 'ready' }))).toBe('No beam: the anode is off.')
    expect(sentence(live({}, []))).toContain('Capture a reading')
    expect(sentence(live({}, [readingView()]))).toContain('Capture a reading')
    expect(sentence(live({ channels: {} }))).toContain('Waiting')
  })
})

describe('what gives how much of the uncertainty', () => {
  it('names the large parts of the variance, the largest first', () => {
    const groups = [
      { name: 'coil pair', share: 0.25 },
      { name: 'edges', share: 0.72 },
      { name: 'beam', share: 0.03 },
    ]
    expect(sharesSentence(groups)).toBe('The edges give 72 % of its variance, the coil pair 25 %.')
    expect(sharesSentence([{ name: 'beam', share: 1 }])).toBe('The beam gives 100 % of its variance.')
  })
})
