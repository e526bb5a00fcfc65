import { deepestBrackets, longestFormula } from './limits.ts'
import { FormulaProblem } from './problem.ts'

const superscripts = '⁰¹²³⁴⁵⁶⁷⁸⁹'
const allowed = /^[A-Za-z\u0388-\u03ff0-9_+\-*/^(). ]$/u
const otherBase = /(?<![A-Za-z0-9_.])0[xbo]/i

/**
 * A typed formula as the parser takes it: signs as they are printed become those of a keyboard, raised digits exponents.
 *
 * @throws FormulaProblem for what is empty, too long, nested too deep or holds a character that no formula has
 */
export function normalise(typed: string): string {
  if (typed.length > longestFormula)
    throw new FormulaProblem(
      'too-long',
      `This is longer than a relation needs to be: at most ${longestFormula} characters are read.`,
    )
  const text = typed
    .replace(/[⁺⁻]?[⁰¹²³⁴⁵⁶⁷⁸⁹]+/g, lowered)
    .normalize('NFKC')
    .replace(/√\s*\(/g, 'sqrt(')
    .replace(/[·×⋅∙•∗]|\*\*/g, (sign) => (sign === '**' ? '^' : '*'))
    .replace(/[÷∕]/g, '/')
    .replace(/[−–]/g, '-')
    .replace(/\s+/g, ' ')
    .trim()
  if (text === '') throw new FormulaProblem('empty', 'Type what e/m is equal to.')
  if (text.length > 2 * longestFormula)
    throw new FormulaProblem('too-long', 'This is longer than a relation needs to be.')
  for (const character of text) if (!allowed.test(character)) throw strange(character)
  if (otherBase.test(text)) throw new FormulaProblem('number', 'Write numbers in decimal digits.')
  requireShallow(text)
  return text
}

function lowered(raised: string): string {
  const digits = [...raised].map((digit) => {
    if (digit === '⁻') return '-'
    return digit === '⁺' ? '' : superscripts.indexOf(digit)
  })
  return `^(${digits.join('')})`
}

function strange(character: string): FormulaProblem {
  if (character === '=')
    return new FormulaProblem('equals-sign', 'Type only what stands to the right of the equals sign.')
  if (character === ',') return new FormulaProblem('comma', 'Write a decimal point, not a comma.')
  if (character === '√')
    return new FormulaProblem('character', 'Put brackets behind the root: √( … ) or sqrt( … ).')
  if (character === '[' || character === '{')
    return new FormulaProblem('character', 'Use round brackets alone.')
  return new FormulaProblem('character', `The character “${character}” has no place in a formula here.`)
}

function requireShallow(text: string): void {
  let depth = 0
  for (const character of text) {
    if (character === '(') depth += 1
    if (character === ')') depth -= 1
    if (depth > deepestBrackets)
      throw new FormulaProblem('too-deep', `More than ${deepestBrackets} brackets stand within each other.`)
  }
}
