import type { BenchState } from '#app/protocol/messages.ts'
import type { ContactName } from '#app/safety/types.ts'

type Contact = BenchState['contacts'][number]

export const contactLabels: Record<ContactName, string> = {
  commissioned: 'in service',
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

/** The open contact that a person has to see to first; null when all are closed. With a line lost, that line. */
export function firstOpen({ contacts, phase }: Pick<BenchState, 'contacts' | 'phase'>): Contact | null {
  const open = contacts.filter((contact) => !contact.closed)
  const lost = phase === 'lost' ? open.find(({ name }) => name === 'signal') : undefined
  return lost ?? open[0] ?? null
}

/** Whether the chain permits the anode, and in one sentence what stops it. */
export function whatStops(
  state: BenchState,
  { isLinked }: { isLinked: boolean },
): { permit: string; why: string } {
  if (!isLinked)
    return { permit: 'Permit unknown.', why: 'The contacts are drawn as the bridge last told them.' }
  if (state.contacts.length === 0)
    return { permit: 'Permit unknown.', why: 'The bridge has not reported the interlock chain yet.' }
  const open = firstOpen(state)
  if (!open) return { permit: 'Anode permitted.', why: 'Every contact is closed.' }
  return {
    permit: 'Anode not permitted.',
    why: open.reason ?? `${contactLabels[open.name]} is open, ${open.measured}.`,
  }
}
