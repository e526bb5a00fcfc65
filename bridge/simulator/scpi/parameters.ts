import { ScpiError } from './errors.ts'
import type { Parameter } from './parse-unit.ts'

/** SCPI-1999 volume 1, 7.2: the numbers that stand for infinity, negative infinity and not-a-number. */
export const specialNumbers = { infinity: 9.9e37, negativeInfinity: -9.9e37, notANumber: 9.91e37 } as const

export type NumericKeyword = 'minimum' | 'maximum' | 'default'
export type Numeric = number | NumericKeyword
export type Range = { minimum: number; maximum: number; default: number }

const multipliers: Record<string, number> = {
  EX: 1e18,
  PE: 1e15,
  T: 1e12,
  G: 1e9,
  MA: 1e6,
  K: 1e3,
  '': 1,
  M: 1e-3,
  U: 1e-6,
  N: 1e-9,
  P: 1e-12,
  F: 1e-15,
  A: 1e-18,
}

const numericKeywords: Record<string, NumericKeyword> = {
  MIN: 'minimum',
  MINIMUM: 'minimum',
  MAX: 'maximum',
  MAXIMUM: 'maximum',
  DEF: 'default',
  DEFAULT: 'default',
}

const numericWords: Record<string, number> = {
  INF: specialNumbers.infinity,
  INFINITY: specialNumbers.infinity,
  NINF: specialNumbers.negativeInfinity,
  NINFINITY: specialNumbers.negativeInfinity,
  NAN: specialNumbers.notANumber,
}

/** Whether a word is the long form of a mnemonic written as `NORMal`, or its short form (the capitals). */
export function isForm(word: string, form: string): boolean {
  return word === form.toUpperCase() || word === form.replace(/[^A-Z]/g, '')
}

/** Takes the parameters of one unit in turn, each as the type that the command wants. */
export class Parameters {
  readonly #parameters: Parameter[]
  #next = 0

  constructor(parameters: Parameter[]) {
    this.#parameters = parameters
  }

  get #peek(): Parameter | undefined {
    return this.#parameters[this.#next]
  }

  #take(): Parameter {
    const parameter = this.#peek
    if (!parameter) throw new ScpiError(-109)
    this.#next++
    return parameter
  }

  /** A SCPI numeric value: decimal with an optional unit, or MINimum, MAXimum, DEFault, INFinity, NAN. */
  numeric(unit: string): Numeric {
    const parameter = this.#take()
    if (parameter.kind === 'word') {
      const value = numericKeywords[parameter.text] ?? numericWords[parameter.text]
      if (value === undefined) throw new ScpiError(-141)
      return value
    }
    if (parameter.kind !== 'number') throw notAllowed(parameter)
    return parameter.value * multiplierOf(parameter.suffix, unit)
  }

  /** A plain number without unit, rounded to a whole one, as the IEEE 488.2 registers take it. */
  whole(range: { minimum: number; maximum: number }): number {
    const parameter = this.#take()
    if (parameter.kind !== 'number') throw notAllowed(parameter)
    if (parameter.suffix !== '') throw new ScpiError(-138)
    const value = Math.round(parameter.value)
    if (!(value >= range.minimum && value <= range.maximum)) throw new ScpiError(-222)
    return value
  }

  /** ON, OFF or a number; a number that rounds to zero is off. */
  boolean(): boolean {
    const parameter = this.#take()
    if (parameter.kind === 'number') {
      if (parameter.suffix !== '') throw new ScpiError(-138)
      return Math.round(parameter.value) !== 0
    }
    if (parameter.kind !== 'word') throw notAllowed(parameter)
    if (parameter.text === 'ON') return true
    if (parameter.text === 'OFF') return false
    throw new ScpiError(-224)
  }

  /** One of the words given in SCPI notation, `NORMal`; answers with it as it was given. */
  choice<T extends string>(forms: readonly T[]): T {
    const parameter = this.#take()
    if (parameter.kind !== 'word') throw notAllowed(parameter)
    const found = forms.find((form) => isForm(parameter.text, form))
    if (found === undefined) throw new ScpiError(-224)
    return found
  }

  /** MINimum, MAXimum or DEFault of a query, where the next parameter is one. */
  optionalKeyword(): NumericKeyword | null {
    const parameter = this.#peek
    if (parameter?.kind !== 'word') return null
    const keyword = numericKeywords[parameter.text]
    if (!keyword) throw new ScpiError(-224)
    this.#next++
    return keyword
  }

  /** Channels of `(@1,3)` or `(@1:3)`; without a list the header's suffix; -109 where there is neither. */
  channels(count: number, suffix: number | undefined): number[] {
    if (this.#peek === undefined && suffix !== undefined) return [checkChannel(suffix, count, -114)]
    const parameter = this.#take()
    if (parameter.kind !== 'expression') throw notAllowed(parameter)
    const match = /^\(\s*@([\s\d,:]+)\)$/.exec(parameter.text)
    if (!match) throw new ScpiError(-171)
    return (match[1] ?? '').split(',').flatMap((part) => channelRange(part, count))
  }

  /** Throws -108 where more was sent than the command takes. */
  end(): void {
    if (this.#next < this.#parameters.length) throw new ScpiError(-108)
  }
}

/** A numeric value as a number inside its range. Throws ScpiError -222. */
export function inRange(numeric: Numeric, range: Range): number {
  const value = typeof numeric === 'number' ? numeric : range[numeric]
  if (!(value >= range.minimum && value <= range.maximum)) throw new ScpiError(-222)
  return value
}

function channelRange(part: string, count: number): number[] {
  const match = /^\s*(\d+)\s*(?::\s*(\d+)\s*)?$/.exec(part)
  if (!match) throw new ScpiError(-171)
  const first = checkChannel(Number(match[1]), count, -222)
  const last = match[2] === undefined ? first : checkChannel(Number(match[2]), count, -222)
  const step = last < first ? -1 : 1
  return Array.from({ length: Math.abs(last - first) + 1 }, (_, index) => first + step * index)
}

function checkChannel(channel: number, count: number, code: number): number {
  if (channel < 1 || channel > count) throw new ScpiError(code)
  return channel
}

function multiplierOf(suffix: string, unit: string): number {
  if (suffix === '') return 1
  if (unit === '') throw new ScpiError(-138)
  const multiplier = suffix.endsWith(unit) ? multipliers[suffix.slice(0, -unit.length)] : undefined
  if (multiplier === undefined) throw new ScpiError(-131)
  return multiplier
}

function notAllowed(parameter: Parameter): ScpiError {
  const codes = { number: -128, word: -148, string: -158, expression: -178, block: -168 } as const
  return new ScpiError(codes[parameter.kind])
}
