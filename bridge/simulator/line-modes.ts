import type { Random } from './model/random.ts'

export const lineModes = ['good', 'cut', 'silent', 'fragment', 'garble', 'delay', 'flood'] as const
export type LineMode = (typeof lineModes)[number]

/** What a line does to its bytes. `value`: milliseconds of `delay`, part of the characters that `garble` replaces. */
export type LineSetting = { mode: LineMode; value: number }

export const lineDefaults: Record<LineMode, number> = {
  good: 0,
  cut: 0,
  silent: 0,
  fragment: 2,
  garble: 0.15,
  delay: 300,
  flood: 40,
}

/** Characters of a damaged answer: none that could be read as part of a number. */
const damage = '?~#@\u007f%'
const rubbish = ['~~~', '#?%', '@noise@', '??,??;?', '%~%~%~%~']

export function garbled(text: string, part: number, random: Random): string {
  return [...text]
    .map((character) =>
      character !== '\n' && random.uniform() < part
        ? (damage[Math.floor(random.uniform() * 6)] ?? '?')
        : character,
    )
    .join('')
}

export function fragments(text: string, random: Random): string[] {
  const parts: string[] = []
  let rest = text
  while (rest !== '') {
    const length = 1 + Math.floor(random.uniform() * 3)
    parts.push(rest.slice(0, length))
    rest = rest.slice(length)
  }
  return parts
}

export function rubbishLine(random: Random): string {
  return `${rubbish[Math.floor(random.uniform() * rubbish.length)] ?? '~'}\n`
}
