import { describe, expect, it } from 'vitest'
import { captureWaitsFor } from '#app/components/bench/capture-words.ts'
import { firstOpen, foldContacts, whatStops } from '#app/components/bench/contact-words.ts'
import { setpointProgress } from '#app/components/bench/setpoint-progress.ts'
import { lostLineSentence, resetWaitsFor, shutdownSentence } from '#app/components/bench/shutdown-words.ts'
import { age, ago } from '#app/components/figures.ts'
import { liveState } from './bench-state.ts'

const thin = '\u2009'
const trip = { kind: 'enclosure', at: 1000, happened: 'Enclosure opened.', toDo: 'Close it.' } as const
const opened = (name: string, reason: string) =>
  liveState().contacts.map((contact) =>
    contact.name === name ? { ...contact, closed: false, reason } : contact,
  )

describe('the interlock chain in words', () => {
  const linked = { isLinked: true }

  it('gives the first open contact, in one sentence', () => {
    const contacts = opened('enclosure', 'The enclosure is open: close it.')
    expect(whatStops(liveState({ contacts }), linked)).toEqual({
      permit: 'Anode not permitted.',
      why: 'The enclosure is open: close it.',
    })
    expect(whatStops(liveState(), linked)).toEqual({
      permit: 'Anode permitted.',
      why: 'Every contact is closed.',
    })
    expect(whatStops(liveState(), { isLinked: false }).permit).toBe('Permit unknown.')
  })

  it('speaks of the lost line first, since nothing behind it is known', () => {
    const contacts = liveState().contacts.map((contact) =>
      contact.name === 'warm-up' || contact.name === 'signal'
        ? { ...contact, closed: false, reason: `${contact.name}.` }
        : contact,
    )
    expect(firstOpen({ contacts, phase: 'lost' })?.name).toBe('signal')
    expect(firstOpen({ contacts, phase: 'warming' })?.name).toBe('warm-up')
  })

  it('never folds an open contact away', () => {
    const contacts = opened('read-back', 'They disagree.')
    const { drawn, folded } = foldContacts(contacts, false)
    expect(drawn.map(({ name }) => name)).toContain('read-back')
    expect(drawn.length + folded).toBe(contacts.length)
    expect(foldContacts(contacts, true)).toEqual({ drawn: contacts, folded: 0 })
  })
})

describe('a shutdown in words', () => {
  const steps = (confirmed: boolean) => [
    { output: 'anode' as const, confirmed: true },
    { output: 'coils' as const, confirmed },
  ]

  it('says what was commanded and measured, with the ages', () => {
    const state = liveState({
      shutdown: { at: 1000, cause: 'Enclosure opened.', steps: steps(true) },
      anodeMeasured: { volts: 0.4, at: 1002 },
    })
    expect(shutdownSentence(state, 1003)).toBe(
      `Off commanded 3${thin}s ago, anode 0.4${thin}V measured 1${thin}s ago.`,
    )
  })

  it('says that an unknown voltage is to be treated as live, and names what was not confirmed', () => {
    const state = liveState({
      shutdown: { at: 1000, cause: 'x', steps: steps(false) },
      anodeMeasured: null,
    })
    expect(shutdownSentence(state, 1003)).toBe(
      `Off commanded 3${thin}s ago, anode voltage unknown: treat as live. Not confirmed: coils. Treat it as on.`,
    )
  })

  it('names the lost line, and what that means for the outputs', () => {
    const lost = (ports: Parameters<typeof lostLineSentence>[0]['ports']) =>
      lostLineSentence(liveState({ ports }))
    expect(lost({ supply: 'lost', 'anode-meter': 'open' })).toMatch(
      /^The line to the supply is lost\. The supply switches its outputs off by itself/,
    )
    expect(lost({ supply: 'open', 'anode-meter': 'lost', 'coil-meter': 'opening' })).toMatch(
      /^The line to the anode meter and coil meter is lost\. The bridge commands the outputs off/,
    )
  })

  it('calls a measured voltage above 60 V hazardous', () => {
    expect(shutdownSentence(liveState({ anodeMeasured: { volts: 61, at: 1000 } }), 1000)).toContain(
      'hazardous',
    )
    expect(shutdownSentence(liveState({ anodeMeasured: { volts: 60, at: 1000 } }), 1000)).not.toContain(
      'hazardous',
    )
  })
})

describe('a reset', () => {
  const tripped = { phase: 'tripped', trip, anodeMeasured: { volts: 0.4, at: 1000 } } as const

  it('waits for its cause, then for the anode to discharge, then for nobody', () => {
    const contacts = opened('enclosure', 'open')
    expect(resetWaitsFor(liveState({ ...tripped, contacts }), { mayReset: true })).toBe('the enclosure')
    expect(
      resetWaitsFor(liveState({ ...tripped, anodeMeasured: { volts: 80, at: 1000 } }), { mayReset: true }),
    ).toBe('the anode to discharge')
    expect(resetWaitsFor(liveState(tripped), { mayReset: true })).toBeNull()
  })

  it('waits for someone who may', () => {
    expect(resetWaitsFor(liveState(tripped), { mayReset: false })).toBe('someone who may reset it')
  })
})

describe('a setpoint', () => {
  const words = (setpoint: Parameters<typeof setpointProgress>[0]['setpoint'], measured: number | null) =>
    setpointProgress({ setpoint, measured, tolerance: 6, unit: 'V', decimals: 1 })
  const anode = { asked: 200, commanded: 200, limit: 300, on: true }

  it('is off, ramping, commanded or reached', () => {
    expect(words({ ...anode, asked: 0, commanded: 0, on: false }, 0)).toBe('off')
    expect(words({ ...anode, commanded: 120 }, 119)).toBe(`ramping, 120.0 of 200.0${thin}V`)
    expect(words(anode, 203)).toBe(`200.0${thin}V reached`)
    expect(words(anode, 150)).toBe(`200.0${thin}V commanded, not reached`)
    expect(words(anode, null)).toBe(`200.0${thin}V commanded, not measured`)
  })
})

describe('capture', () => {
  const me = { id: 'p1', role: 'student' } as const
  const linked = { isLinked: true, person: me }

  it('is for the person at the controls, and for staff', () => {
    const asked = (person: { id: string; role: 'student' | 'instructor' }) =>
      captureWaitsFor(liveState(), { isLinked: true, person })
    expect(asked({ id: 'p2', role: 'student' })).toContain('for the person at the controls')
    expect(asked({ id: 'p2', role: 'instructor' })).toBeNull()
  })

  it('waits for the link, the anode and the channels in turn', () => {
    expect(captureWaitsFor(liveState(), { isLinked: false, person: me })).toContain('link')
    expect(captureWaitsFor(liveState({ phase: 'ready' }), linked)).toContain('anode to be on')
    expect(captureWaitsFor(liveState({ channels: {} }), linked)).toBe(
      'Capture waits for the anode voltage: stale.',
    )
    expect(captureWaitsFor(liveState(), linked)).toBeNull()
  })
})

describe('an age', () => {
  it('is just now within the first second, also when the clocks disagree', () => {
    expect([ago(-2), ago(0.9), ago(1)]).toEqual(['just now', 'just now', `1${thin}s ago`])
  })

  it('counts seconds, then minutes, then hours', () => {
    expect([age(-1), age(59.9), age(150), age(3900)]).toEqual([
      `0${thin}s`,
      `59${thin}s`,
      `2${thin}min`,
      `1${thin}h 5${thin}min`,
    ])
  })
})
