import { describe, expect, it } from 'vitest'
import { anodeKnowledge } from '#app/safety/words.ts'

describe('What is known of the anode', () => {
  it('is the measured voltage and its age', () => {
    expect(anodeKnowledge({ volts: 0.42, at: 10 }, 12)).toBe('off commanded, 0.4 V measured 2 s ago')
  })

  it('is nothing without a measurement, or with one that says nothing of now', () => {
    expect(anodeKnowledge(null, 12)).toBe('off commanded, voltage unknown: treat as live')
    expect(anodeKnowledge({ volts: 0.42, at: 10 }, 72)).toBe(
      'off commanded, voltage unknown: treat as live (0.4 V was measured 62 s ago)',
    )
  })
})
