/** Raised with every change of the wording: who acknowledged an older wording acknowledges again. */
export const cautionsVersion = 1

/** What everyone acknowledges before they take the controls, once a term. */
export const cautions: { title: string; text: string }[] = [
  {
    title: 'Hazardous voltage at every lead of the tube',
    text: 'The heater’s leads too, unless the wiring plan says otherwise. Touch nothing while the supply is on. Before rewiring switch off, let it discharge, and prove it dead with a meter.',
  },
  {
    title: 'Hot coils and a hot tube',
    text: 'They stay hot for minutes after they are switched off. Do not touch the coils or the neck of the tube.',
  },
  {
    title: 'An evacuated glass bulb',
    text: 'It can implode. Wear eye protection near it, and do not knock or press it.',
  },
  {
    title: 'A dark room',
    text: 'Keep the floor clear. Know where the light switch and the emergency stop are before the lights go off.',
  },
  {
    title: 'Magnets and implanted medical devices',
    text: 'Keep the coils and any magnet apart from pacemakers and other implanted devices. Whoever wears one stays away from the bench.',
  },
  {
    title: 'Not alone',
    text: 'Nobody works alone in the room while a voltage is on.',
  },
  {
    title: 'Back to standby afterwards',
    text: 'Anode and coils off, heater down, and the tube left to cool.',
  },
]

/** Stands below the cautions, wherever they are shown. */
export const cautionsLimits =
  'The limits and interlocks of this software are an aid. They do not replace the hardware interlocks of the supplies, the local rules, the risk assessment, or the judgement of a licensed or competent person.'

/**
 * The term that a date falls in, by the calendar of this machine: spring from January to July, autumn from August to
 * December, as in '2026-autumn'.
 */
export function termOf(date: Date): string {
  return `${date.getFullYear()}-${date.getMonth() < 7 ? 'spring' : 'autumn'}`
}
