import { describe, expect, it } from 'vitest'
import { benchSummary, byAttention, mayBeOn, roomWords } from '#app/components/hall/attention.ts'
import { liveState } from './bench-state.ts'

const off = { on: false, asked: 0, commanded: 0, limit: 300 }
const dark = { heater: off, anode: off, coils: off, phase: 'off' } as const
const trip = { kind: 'enclosure', at: 1000, happened: 'Enclosure opened.', toDo: 'Close it.' } as const

describe('a tile of the hall', () => {
  it('says how loudly what needs a person', () => {
    expect(benchSummary(liveState({ phase: 'tripped', trip }))).toMatchObject({
      attention: 'trip',
      words: 'Enclosure opened.',
    })
    expect(benchSummary(liveState({ phase: 'lost' })).words).toContain('treat as live')
    expect(benchSummary(null).words).toContain('treat as live')
    expect(benchSummary(liveState({ warnings: ['near its limit'] }))).toMatchObject({ attention: 'caution' })
    expect(benchSummary(liveState())).toMatchObject({ attention: 'none', words: 'settled' })
  })

  it('stands before those that need a person less, then by name', () => {
    const benches = [
      { name: 'Bench 10', state: liveState() },
      { name: 'Bench 2', state: liveState() },
      { name: 'Bench 3', state: liveState({ phase: 'lost' }) },
      { name: 'Bench 4', state: liveState({ phase: 'tripped', trip }) },
      { name: 'Bench 5', state: liveState({ warnings: ['near its limit'] }) },
    ]
    expect(byAttention(benches).map(({ name }) => name)).toEqual([
      'Bench 4',
      'Bench 3',
      'Bench 5',
      'Bench 2',
      'Bench 10',
    ])
  })

  it('has a quiet make safe only where every output is known to be off', () => {
    expect(mayBeOn(liveState(dark))).toBe(false)
    expect(mayBeOn(liveState({ ...dark, heater: { ...off, on: true } }))).toBe(true)
    expect(mayBeOn(liveState({ ...dark, phase: 'lost' }))).toBe(true)
    expect(mayBeOn(liveState({ ...dark, phase: 'tripped', trip }))).toBe(true)
    expect(mayBeOn(null)).toBe(true)
  })

  it('is counted in the words of the room', () => {
    expect(roomWords([liveState(), liveState({ phase: 'lost' }), null])).toBe('3 benches, 1 live, 1 lost')
    expect(roomWords([liveState(dark)])).toBe('1 bench')
    expect(roomWords([liveState(dark)], 1)).toBe('2 benches, 1 not watched')
  })
})
