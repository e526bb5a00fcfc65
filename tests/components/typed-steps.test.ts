import { describe, expect, it } from 'vitest'
import { nextTypedStep } from '#app/components/bench/typed-steps.ts'
import { edgesBy, readingView } from './bench-state.ts'

const person = { id: 'p1', name: 'Kofi Adeyemi', role: 'student' } as const
const mine = { personId: 'p1', name: 'Kofi Adeyemi', at: '2026-11-03T13:50:00.000Z' }
const seen = { cautionsAcknowledged: true, ticked: [mine], readings: [], person }
const rung = {
  personId: 'p2',
  name: 'p2',
  rung: '8 cm',
  settingHalfWidthAmps: null,
  diameterMetres: 0.08,
  uDiameterMetres: 0.0002,
}
const step = (changes: Partial<Parameters<typeof nextTypedStep>[0]>) =>
  nextTypedStep({ ...seen, ...changes }).name

describe('the next step at a bench without ports', () => {
  it('begins with the cautions, then the checklist, which each person ticks', () => {
    expect(step({ cautionsAcknowledged: false, ticked: [] })).toBe('Acknowledge the cautions')
    expect(step({ ticked: [] })).toBe('Tick the checklist')
    expect(step({ ticked: [{ ...mine, personId: 'p2' }] })).toBe('Tick the checklist')
  })

  it('goes from what the meters show to the beam and back', () => {
    expect(step({})).toBe('Type what the meters show')
    expect(step({ readings: [readingView()] })).toBe('Read the beam')
    expect(step({ readings: [readingView({ edges: [edgesBy('p2')] })] })).toBe('Read the beam')
    expect(step({ readings: [readingView({ edges: [edgesBy('p1')] })] })).toBe('Type what the meters show')
  })

  it('takes a rung for read, whoever noted it', () => {
    expect(step({ readings: [readingView({ rung })] })).toBe('Type what the meters show')
  })
})
