type Entry = { kind: string; sentence: string }

const phases: Record<string, string> = {
  unconfigured: 'The bench is not commissioned.',
  lost: 'A line of the bench is lost.',
  off: 'The bench is off.',
  warming: 'The heater is warming up.',
  ready: 'The heater is warm and the anode off.',
  live: 'Anode on: the bench is live.',
  tripped: 'The bench has tripped.',
}
/** What another entry of the same moment does not tell: the heater is warm, the anode is on, the anode is off. */
const tellingPhases = ['ready', 'live']

const asked: Record<string, string> = {
  'set-anode': 'Anode voltage',
  'set-coils': 'Coil current',
  'set-polarity': 'Coil polarity',
  'switch-heater': 'Heater',
  'take-controls': 'Taking the controls',
  'take-over': 'Taking over',
  'hand-over': 'Handing over',
  'release-controls': 'Releasing the controls',
  'reset-trip': 'Reset',
  'make-safe': 'Make safe',
  capture: 'Capture',
}

/** An entry of the log as a plain sentence: the bridge names phases and commands by its own words for them. */
export function logSentence({ kind, sentence }: Entry): string {
  if (kind === 'phase') return phases[phaseAfter(sentence) ?? ''] ?? sentence
  const refused = /^Refused \(([a-z-]+)\): (.*)$/s.exec(sentence)
  return refused ? `${asked[refused[1] ?? ''] ?? 'A command'} refused. ${refused[2]}` : sentence
}

/** Whether an entry only repeats what the entries beside it say. */
export function isRepetition({ kind, sentence }: Entry): boolean {
  const phase = kind === 'phase' ? phaseAfter(sentence) : null
  return phase !== null && !tellingPhases.includes(phase)
}

/** The person to be named beside a sentence: nobody where the sentence does so itself. */
export function namedBeside(sentence: string, personName: string | null): string | null {
  return personName !== null && !sentence.includes(personName) ? personName : null
}

function phaseAfter(sentence: string): string | null {
  return /^From [a-z]+ to ([a-z]+)\.$/.exec(sentence)?.[1] ?? null
}
