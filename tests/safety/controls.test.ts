import { describe, expect, it } from 'vitest'
import {
  presence,
  refusalsToHandOver,
  refusalsToTake,
  refusalsToTakeOver,
  refusalsUnlessHolder,
  socketGraceSeconds,
  warningSeconds,
} from '#app/safety/controls.ts'
import { anodeKnowledge } from '#app/safety/words.ts'
import { actor } from './bench-view.ts'

const holder = { ...actor('student'), since: 0 }
const codesOf = (refusals: { code: string }[]) => refusals.map(({ code }) => code)

describe('The controls', () => {
  it('are taken when free, by a student only after the cautions, by a guest never', () => {
    expect(refusalsToTake(null, actor('student'))).toEqual([])
    expect(refusalsToTake(holder, actor('student'))).toEqual([])
    expect(codesOf(refusalsToTake(null, actor('student', { acknowledged: false })))).toEqual([
      'not-acknowledged',
    ])
    expect(refusalsToTake(null, actor('technician', { acknowledged: false }))).toEqual([])
    expect(codesOf(refusalsToTake(null, actor('guest')))).toEqual(['not-permitted'])
    expect(refusalsToTake(holder, actor('instructor'))[0]).toMatchObject({
      code: 'controls-taken',
      sentence: expect.stringContaining('The student'),
    })
  })

  it('are taken over by staff alone', () => {
    expect(refusalsToTakeOver(actor('technician'))).toEqual([])
    expect(refusalsToTakeOver(actor('instructor'))).toEqual([])
    expect(codesOf(refusalsToTakeOver(actor('student')))).toEqual(['not-permitted'])
    expect(codesOf(refusalsToTakeOver(actor('guest')))).toEqual(['not-permitted'])
  })

  it('are handed over and released only by whoever is there', () => {
    expect(refusalsToHandOver(holder, actor('student'), actor('instructor'))).toEqual([])
    expect(codesOf(refusalsToHandOver(holder, actor('instructor'), actor('student')))).toEqual([
      'not-at-the-controls',
    ])
    expect(codesOf(refusalsToHandOver(holder, actor('student'), actor('guest')))).toEqual(['not-permitted'])
    expect(
      codesOf(
        refusalsToHandOver(
          holder,
          actor('student'),
          actor('student', { personId: 'b', acknowledged: false }),
        ),
      ),
    ).toEqual(['not-acknowledged'])
    expect(codesOf(refusalsUnlessHolder(null, actor('student')))).toEqual(['not-at-the-controls'])
  })
})

describe('Presence', () => {
  const seen = { pageConnected: true, pageLastAt: 0, inputLastAt: 0, deadManMinutes: 10 }

  it('holds with a page connected and some input within the time, and is warned of a minute ahead', () => {
    expect(presence({ ...seen, now: 539 })).toEqual({ until: 600, warned: false, lost: null })
    expect(presence({ ...seen, now: 600 - warningSeconds })).toEqual({ until: 600, warned: true, lost: null })
    expect(presence({ ...seen, now: 600 })).toMatchObject({ lost: 'input' })
  })

  it('is lost five seconds after the page went, and has as long before the page comes', () => {
    const gone = { ...seen, pageConnected: false, pageLastAt: 100, inputLastAt: 100 }
    expect(presence({ ...gone, now: 104.9 })).toMatchObject({ lost: null, until: 100 + socketGraceSeconds })
    expect(presence({ ...gone, now: 105 })).toMatchObject({ lost: 'page' })
  })
})

describe('What is said of the anode', () => {
  it('is what was commanded and measured and when, or that the voltage is unknown; never that it is safe', () => {
    expect(anodeKnowledge({ volts: 0.4, at: 8 }, 10)).toBe('off commanded, 0.4 V measured 2 s ago')
    expect(anodeKnowledge(null, 10)).toBe('off commanded, voltage unknown: treat as live')
  })
})
