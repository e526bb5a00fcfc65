import type { Actor, Refusal, Role } from './types.ts'
import type { ControlsHolder } from './view.ts'

/** A page whose socket is gone no longer shows presence after this; a fresh holder's page has as long to connect. */
export const socketGraceSeconds = 5
/** The dead-man warns so long before it acts. */
export const warningSeconds = 60

export const isStaff = (role: Role): boolean => role === 'technician' || role === 'instructor'

const refuse = (code: Refusal['code'], sentence: string): Refusal[] => [{ code, sentence }]

const guests = 'A guest of a demonstration may watch only: sign in to take part.'

/** Why this person cannot take the free controls; empty when they can, or already have them. */
export function refusalsToTake(holder: ControlsHolder | null, actor: Actor): Refusal[] {
  if (actor.role === 'guest') return refuse('not-permitted', guests)
  if (holder !== null && holder.personId !== actor.personId) {
    return refuse('controls-taken', `${holder.name} is at the controls: ask them to hand over.`)
  }
  if (actor.role === 'student' && !actor.acknowledged)
    return refuse('not-acknowledged', unacknowledged(actor))
  return []
}

export function refusalsToTakeOver(actor: Actor): Refusal[] {
  return isStaff(actor.role)
    ? []
    : refuse('not-permitted', 'Only an instructor or a technician may take over the controls: ask for them.')
}

export function refusalsToHandOver(
  holder: ControlsHolder | null,
  actor: Actor,
  to: { personId: string; name: string; role: Role; acknowledged: boolean },
): Refusal[] {
  const own = refusalsUnlessHolder(holder, actor)
  if (own.length > 0) return own
  if (to.role === 'guest') return refuse('not-permitted', guests)
  if (to.role === 'student' && !to.acknowledged) return refuse('not-acknowledged', unacknowledged(to))
  return []
}

/** Empty when this person is at the controls, whether or not the cautions are acknowledged. */
export function refusalsUnlessHolder(holder: ControlsHolder | null, actor: Actor): Refusal[] {
  if (actor.role === 'guest') return refuse('not-permitted', guests)
  if (holder === null) {
    return refuse('not-at-the-controls', 'Nobody is at the controls: take the controls first.')
  }
  if (holder.personId !== actor.personId) {
    return refuse('not-at-the-controls', `${holder.name} is at the controls, you are not.`)
  }
  return []
}

/** Empty when this person is at the controls and has acknowledged the cautions: whoever changes a setpoint must. */
export function refusalsToOperate(holder: ControlsHolder | null, actor: Actor): Refusal[] {
  const own = refusalsUnlessHolder(holder, actor)
  if (own.length > 0) return own
  return actor.acknowledged ? [] : refuse('not-acknowledged', unacknowledged(actor))
}

export const holderFrom = (
  person: { personId: string; name: string; role: Role; acknowledged: boolean },
  since: number,
): ControlsHolder => ({
  personId: person.personId,
  name: person.name,
  role: person.role,
  acknowledged: person.acknowledged,
  since,
})

const unacknowledged = (person: { name: string }): string =>
  `${person.name} has not acknowledged the cautions for this term: read and acknowledge them first.`

export type Presence = {
  /** When the dead-man acts unless something changes. */
  until: number
  /** Whether it acts within `warningSeconds` for want of input. */
  warned: boolean
  lost: 'page' | 'input' | null
}

/**
 * Presence of the person at the controls: a page of theirs on this bench that is connected (or was within
 * `socketGraceSeconds`), and some input there within the dead-man's time.
 */
export function presence(seen: {
  now: number
  pageConnected: boolean
  /** When the last page went, or the controls were taken. */
  pageLastAt: number
  inputLastAt: number
  deadManMinutes: number
}): Presence {
  const inputUntil = seen.inputLastAt + seen.deadManMinutes * 60
  const pageUntil = seen.pageConnected ? Number.POSITIVE_INFINITY : seen.pageLastAt + socketGraceSeconds
  const until = Math.min(inputUntil, pageUntil)
  return {
    until,
    warned: inputUntil - seen.now <= warningSeconds,
    lost: seen.now < until ? null : pageUntil <= inputUntil ? 'page' : 'input',
  }
}
