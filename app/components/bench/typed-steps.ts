import type { TypedBenchView } from '#app/benches/bench-view.server.ts'
import { isReadBy, readingToRead } from './logbook-rows.ts'

export const typedStepNames = [
  'Acknowledge the cautions',
  'Tick the checklist',
  'Type what the meters show',
  'Read the beam',
] as const

type Step = { index: number; name: (typeof typedStepNames)[number]; why: string }
type Seen = Pick<TypedBenchView, 'cautionsAcknowledged' | 'ticked' | 'readings' | 'person'>

/** Whether this person has ticked the checklist for the run. */
export const hasTicked = ({ ticked, person }: Pick<Seen, 'ticked' | 'person'>): boolean =>
  ticked.some(({ personId }) => personId === person.id)

/** The one thing to do next at a bench without ports, and why. */
export function nextTypedStep(view: Seen): Step {
  const step = (index: number, why: string): Step => ({
    index,
    name: typedStepNames[index] ?? typedStepNames[0],
    why,
  })
  if (!view.cautionsAcknowledged) return step(0, 'This bench is for people who know what can hurt at it.')
  if (!hasTicked(view))
    return step(1, 'No instrument watches this bench: you look at each contact before a voltage is on.')
  const current = readingToRead(view.readings)
  if (current && !isReadBy(current, view.person.id))
    return step(3, `Reading ${current.number} has no diameter of yours. Read it while the beam stands.`)
  return step(2, 'Wait until both meters stand still, then type every digit that they show.')
}
