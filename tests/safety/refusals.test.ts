import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { startMachine } from '#app/safety/machine.ts'
import { refusalsFor, type SafetyCommand } from '#app/safety/refusals.ts'
import { type Actor, type RefusalCode, type Trip, type TripKind, tripKinds } from '#app/safety/types.ts'
import type { BenchView } from '#app/safety/view.ts'
import { actor, limits, liveMachine, run, viewAt } from './bench-view.ts'

const { warmUp } = liveMachine()
const student = actor('student')
const codes = (
  command: SafetyCommand,
  who: Actor = student,
  changes: Partial<BenchView> = {},
  trip: Trip | null = null,
) => refusalsFor({ view: viewAt(20, {}, changes), warmUp, trip, actor: who, command }).map(({ code }) => code)
const tripOf = (kind: TripKind): Trip => ({
  kind,
  at: 0,
  happened: 'It happened.',
  toDo: 'Do this, then reset.',
})

const anode: SafetyCommand = { kind: 'set-anode', volts: 250 }
const coils: SafetyCommand = { kind: 'set-coils', amps: 1.5 }

describe('A command', () => {
  it('is carried out when nothing speaks against it', () => {
    for (const command of [
      anode,
      coils,
      { kind: 'set-polarity', polarity: -1 },
      { kind: 'switch-heater', on: true },
      { kind: 'release-controls' },
      { kind: 'make-safe' },
    ] satisfies SafetyCommand[]) {
      expect(codes(command), command.kind).toEqual([])
    }
  })

  it.each([
    [{ kind: 'set-anode', volts: 300.1 }, 'above-limit'],
    [{ kind: 'set-anode', volts: 351 }, 'above-range'],
    [{ kind: 'set-anode', volts: -0.1 }, 'below-zero'],
    [{ kind: 'set-anode', volts: null }, 'not-a-number'],
    [{ kind: 'set-anode', volts: Number.NaN }, 'not-a-number'],
    [{ kind: 'set-coils', amps: 2.01 }, 'above-limit'],
    [{ kind: 'set-coils', amps: 3.6 }, 'above-range'],
    [{ kind: 'set-coils', amps: -1 }, 'below-zero'],
    [{ kind: 'set-coils', amps: null }, 'not-a-number'],
  ] as [SafetyCommand, RefusalCode][])('%j is refused as %s', (command, code) => {
    expect(codes(command)).toContain(code)
  })

  it('at the limit itself is carried out, and above it never, by however little', () => {
    expect(codes({ kind: 'set-anode', volts: limits.anodeVolts })).toEqual([])
    fc.assert(
      fc.property(fc.double({ min: limits.anodeVolts, max: 1e6, minExcluded: true, noNaN: true }), (volts) =>
        codes({ kind: 'set-anode', volts }).includes('above-limit'),
      ),
    )
  })

  it.each([
    ['not-configured', { config: null }],
    ['e-stop-in', { interlock: { eStopOut: false, enclosureClosed: true } }],
    ['enclosure-open', { interlock: { eStopOut: true, enclosureClosed: false } }],
    ['line-lost', { lostLines: ['supply'] }],
    ['line-lost', { prepared: false }],
    ['polarity-changing', { polarityChanging: true }],
    ['not-at-the-controls', { holder: null }],
  ] as [RefusalCode, Partial<BenchView>][])('for anode or coils is refused as %s', (code, changes) => {
    expect(codes(anode, student, changes)).toContain(code)
    expect(codes(coils, student, changes)).toContain(code)
  })

  it('for the coils needs no heater, for the anode it does', () => {
    const cold = startMachine(0).warmUp
    const view = viewAt(20, { heater: 0, anode: 0, coils: 0 })
    const of = (command: SafetyCommand) =>
      refusalsFor({ view, warmUp: cold, trip: null, actor: student, command })
    expect(of(coils)).toEqual([])
    expect(of(anode).map(({ code }) => code)).toEqual(['heater-off'])
  })

  it('for the anode is refused while warming up or out of the band', () => {
    const cold = run(startMachine(0), 8, 10, (at) => viewAt(at, { anode: 0, coils: 0 })).machine.warmUp
    const view = viewAt(10, { anode: 0, coils: 0 })
    const of = (changes: Partial<BenchView>) =>
      refusalsFor({ view: { ...view, ...changes }, warmUp: cold, trip: null, actor: student, command: anode })
    expect(of({})[0]).toMatchObject({ code: 'not-warmed-up' })
    expect(of({ values: { ...view.values, heaterVolts: 5 } }).map(({ code }) => code)).toContain(
      'heater-out-of-band',
    )
  })

  it('for zero is never refused to whoever is at the controls', () => {
    const worst = { lostLines: ['supply'], interlock: null, polarityChanging: true }
    expect(codes({ kind: 'set-anode', volts: 0 }, student, worst, tripOf('enclosure'))).toEqual([])
    expect(codes({ kind: 'set-coils', amps: 0 }, student, worst, tripOf('enclosure'))).toEqual([])
    expect(codes({ kind: 'switch-heater', on: false }, student, worst, tripOf('enclosure'))).toEqual([])
  })

  it('is refused to a guest, to somebody else, and without the cautions acknowledged', () => {
    expect(codes(anode, actor('guest'))).toContain('not-permitted')
    expect(codes(anode, actor('technician'))).toContain('not-at-the-controls')
    expect(codes(coils, actor('student', { acknowledged: false }))).toContain('not-acknowledged')
  })

  it('while tripped is refused, make safe never but to a guest', () => {
    const trip = tripOf('heater')
    expect(codes(anode, student, {}, trip)).toContain('tripped')
    expect(codes(coils, student, {}, trip)).toContain('tripped')
    for (const role of ['technician', 'instructor', 'student'] as const) {
      expect(
        codes({ kind: 'make-safe' }, actor(role), { config: null, lostLines: ['supply'] }, trip),
      ).toEqual([])
    }
    expect(codes({ kind: 'make-safe' }, actor('guest'))).toEqual(['not-permitted'])
  })

  it('to reverse the coils is refused where they cannot be', () => {
    const view = viewAt(20)
    const fixed = { config: view.config && { ...view.config, coilsReversible: false } }
    expect(codes({ kind: 'set-polarity', polarity: -1 }, student, fixed)).toEqual(['polarity-fixed'])
  })
})

describe('A reset', () => {
  const reset: SafetyCommand = { kind: 'reset-trip' }
  const off = viewAt(20, { anode: 0, coils: 0 })
  const idle = { values: off.values, outputs: off.outputs }

  it.each(tripKinds)('of %s is permitted by role', (kind) => {
    const technicianOnly = kind === 'over-voltage' || kind === 'coil-temperature'
    const asked = (who: Actor) => codes(reset, who, idle, tripOf(kind))
    expect(asked(actor('technician'))).toEqual([])
    expect(asked(actor('instructor'))).toEqual(technicianOnly ? ['not-permitted'] : [])
    expect(asked(student)).toEqual(technicianOnly ? ['not-permitted'] : [])
    expect(asked(actor('guest'))).toEqual(['not-permitted'])
  })

  it('by a student needs the controls of that bench, and a bench that lets students', () => {
    expect(codes(reset, actor('student', { personId: 'other' }), idle, tripOf('enclosure'))).toEqual([
      'not-at-the-controls',
    ])
    const strict = {
      ...idle,
      config: off.config && { ...off.config, limits: { ...limits, studentMayReset: false } },
    }
    expect(codes(reset, student, strict, tripOf('enclosure'))).toEqual(['not-permitted'])
  })

  it.each([
    ['e-stop', { interlock: { eStopOut: false, enclosureClosed: true } }],
    ['enclosure', { interlock: { eStopOut: true, enclosureClosed: false } }],
    ['coil-temperature', { values: { ...off.values, coilCelsius: 61 } }],
    ['heater', { values: { ...off.values, heaterVolts: 5 } }],
    ['over-current', { values: { ...off.values, coilAmps: 2.2 } }],
    ['anode-current', { values: { ...off.values, anodeAmps: 0.01 } }],
    ['over-current', { values: { ...off.values, coilSupplyAmps: 2.2 } }],
    ['over-voltage', { values: { ...off.values, anodeVolts: 40 } }],
    ['enclosure', { values: { ...off.values, anodeVolts: null } }],
    ['enclosure', { values: { ...off.values, anodeSupplyVolts: null } }],
    ['anode-current', { values: { ...off.values, anodeAmps: null } }],
    ['over-current', { values: { ...off.values, coilAmps: null } }],
    ['read-back', { values: { ...off.values, anodeVolts: 40 } }],
    ['stale-channel', { lastGoodAt: { ...off.lastGoodAt, coilAmps: 18 } }],
    ['lost-line', { lostLines: ['supply'] }],
  ] as [TripKind, Partial<BenchView>][])(
    'of %s is refused while the fault stands, with the reason',
    (kind, changes) => {
      const [refusal] = refusalsFor({
        view: viewAt(20, {}, { ...idle, ...changes }),
        warmUp,
        trip: tripOf(kind),
        actor: actor('technician'),
        command: reset,
      })
      expect(refusal?.code).toBe('fault-present')
      expect(refusal?.sentence).toMatch(/still/)
    },
  )

  it('without a trip is refused', () => {
    expect(codes(reset, actor('technician'))).toEqual(['not-tripped'])
  })
})
