import type { BenchState } from '#app/protocol/messages.ts'
import type { ContactName } from '#app/safety/types.ts'
import { lowerFirst } from './shutdown-words.ts'

type Contact = BenchState['contacts'][number]

export const contactLabels: Record<ContactName, string> = {
  commissioned: 'commis-sioned',
  'e-stop': 'e-stop',
  enclosure: 'enclosure',
  'warm-up': 'warm-up',
  heater: 'heater',
  'coil-temperature': 'coil temp',
  signal: 'signal',
  'read-back': 'read-back',
  'no-trip': 'trip',
  controls: 'controls',
}

/** Those drawn even when closed: what a person at the bench looks for first. */
const alwaysDrawn: ContactName[] = ['e-stop', 'enclosure', 'warm-up', 'coil-temperature', 'signal']

/** The chain in its order: which contacts are drawn, and how many closed ones are folded into one. */
export function foldContacts(contacts: Contact[], isUnfolded: boolean): { drawn: Contact[]; folded: number } {
  if (isUnfolded) return { drawn: contacts, folded: 0 }
  const drawn = contacts.filter((contact) => !contact.closed || alwaysDrawn.includes(contact.name))
  return { drawn, folded: contacts.length - drawn.length }
}

/** One sentence: what stops the anode now. */
export function whatStops(state: BenchState): string {
  const open = state.contacts.find((contact) => !contact.closed)
  if (!open)
    return state.contacts.length
      ? 'Nothing stops the anode: every contact is closed.'
      : 'The bridge has not reported the interlock chain yet.'
  const reason = open.reason ?? `${contactLabels[open.name]} is open, ${open.measured}.`
  return `What stops the anode: ${lowerFirst(reason)}`
}
