import { describe, expect, it } from 'vitest'
import { isRepetition, logSentence, namedBeside } from '#app/components/bench/log-words.ts'

const phase = (from: string, to: string) => ({ kind: 'phase', sentence: `From ${from} to ${to}.` })

describe('an entry of the log', () => {
  it('tells a phase in a sentence', () => {
    expect(logSentence(phase('ready', 'live'))).toBe('Anode on: the bench is live.')
    expect(logSentence(phase('live', 'tripped'))).toBe('The bench has tripped.')
  })

  it('says what was refused in the words of the page, with every sentence of the refusal', () => {
    const sentence = "Refused (set-anode): 400 V is 100 V above this bench's limit of 300 V. So it is."
    expect(logSentence({ kind: 'refusal', sentence })).toBe(
      "Anode voltage refused. 400 V is 100 V above this bench's limit of 300 V. So it is.",
    )
    expect(logSentence({ kind: 'refusal', sentence: 'Refused (something): No.' })).toBe(
      'A command refused. No.',
    )
  })

  it('leaves every other sentence alone', () => {
    const sentence = 'The enclosure was opened with the anode on. Close the enclosure, then reset.'
    expect(logSentence({ kind: 'trip', sentence })).toBe(sentence)
    expect(logSentence(phase('here', 'nowhere'))).toBe('From here to nowhere.')
  })

  it('is a repetition only as a phase that another entry explains', () => {
    expect(isRepetition(phase('live', 'tripped'))).toBe(true)
    expect(isRepetition(phase('ready', 'live'))).toBe(false)
    expect(isRepetition(phase('warming', 'ready'))).toBe(false)
    expect(isRepetition({ kind: 'trip', sentence: 'From live to tripped.' })).toBe(false)
    expect(isRepetition({ kind: 'phase', sentence: 'Something else.' })).toBe(false)
  })

  it('names the person only where the sentence does not', () => {
    expect(namedBeside('Heater on.', 'Kofi Adeyemi')).toBe('Kofi Adeyemi')
    expect(namedBeside('Kofi Adeyemi took the controls.', 'Kofi Adeyemi')).toBeNull()
    expect(namedBeside('Heater on.', null)).toBeNull()
  })
})
