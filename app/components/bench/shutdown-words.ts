import type { BenchState } from '#app/protocol/messages.ts'
import { type ContactName, hazardousVolts, type TripKind } from '#app/safety/types.ts'
import { listed } from '#app/safety/words.ts'
import { ago, fixed, thinSpace } from '../figures.ts'

/** What was commanded and what was measured since, with its age. It never says that a bench is safe. */
export function shutdownSentence(state: BenchState, now: number | null): string {
  const measured = anodeSentence(state, now)
  const { shutdown } = state
  if (!shutdown) return capital(`${measured}.`)
  const when = now === null ? '' : ` ${ago(now - shutdown.at)}`
  const open = shutdown.steps.filter(({ confirmed }) => !confirmed).map(({ output }) => output)
  const unconfirmed = open.length
    ? ` Not confirmed: ${open.join(', ')}. Treat ${open.length > 1 ? 'them' : 'it'} as on.`
    : ''
  return `Off commanded${when}, ${measured}.${unconfirmed}`
}

function anodeSentence({ anodeMeasured }: BenchState, now: number | null): string {
  if (!anodeMeasured) return 'anode voltage unknown: treat as live'
  const when = now === null ? '' : ` ${ago(now - anodeMeasured.at)}`
  const hazard = Math.abs(anodeMeasured.volts) > hazardousVolts ? ', hazardous' : ''
  return `anode ${fixed(anodeMeasured.volts, 1)}${thinSpace}V measured${when}${hazard}`
}

/** Which line is lost, what that means for the outputs, and what to do. */
export function lostLineSentence({ ports }: BenchState): string {
  const lost = Object.entries(ports).flatMap(([instrument, port]) =>
    port === 'open' ? [] : [instrument.replace('-', ' ')],
  )
  const means = lost.includes('supply')
    ? 'The supply switches its outputs off by itself when it hears nothing.'
    : 'The bridge commands the outputs off and permits none until it answers.'
  return `The line to the ${listed(lost) || 'instruments'} is lost. ${means} Check the cable and the instrument; the bridge keeps trying.`
}

/** 'Enclosure opened.' after a colon. */
export function lowerFirst(sentence: string): string {
  return /^[A-Z][a-z]/.test(sentence) ? sentence.charAt(0).toLowerCase() + sentence.slice(1) : sentence
}

const capital = (text: string) => text.charAt(0).toUpperCase() + text.slice(1)

const contactBehind: Partial<Record<TripKind, [ContactName, string]>> = {
  'e-stop': ['e-stop', 'the emergency stop'],
  enclosure: ['enclosure', 'the enclosure'],
  'coil-temperature': ['coil-temperature', 'the coils to cool'],
}
const dischargedVolts = 5

/** What a reset still waits for, as far as this page can see; null when it may be pressed. The bridge has the last word. */
export function resetWaitsFor(state: BenchState, person: { mayReset: boolean }): string | null {
  if (!state.trip) return null
  if (!person.mayReset) return 'someone who may reset it'
  const behind = contactBehind[state.trip.kind]
  const isOpen = (name: ContactName) =>
    state.contacts.some((contact) => contact.name === name && !contact.closed)
  if (behind && isOpen(behind[0])) return behind[1]
  if (isOpen('signal')) return 'a fresh signal'
  if (!state.anodeMeasured || state.anodeMeasured.volts > dischargedVolts) return 'the anode to discharge'
  return null
}
