import { ScpiError } from './errors.ts'

export type Parameter =
  | { kind: 'number'; value: number; suffix: string }
  | { kind: 'word'; text: string }
  | { kind: 'string'; text: string }
  | { kind: 'expression'; text: string }
  | { kind: 'block' }

/** One program message unit: `:SOUR:VOLT 5 V,(@1)` or `*ESE 32`. Mnemonics are in capitals, without the colons. */
export type Unit = {
  isCommon: boolean
  isRooted: boolean
  isQuery: boolean
  mnemonics: string[]
  parameters: Parameter[]
}

const mnemonicLimit = 12
const commonHeader = /^\*[A-Za-z]+\??$/
const compoundHeader = /^:?[A-Za-z]\w*(:[A-Za-z]\w*)*\??$/
const decimal = /^([+-]?(?:\d+\.?\d*|\.\d+))(?:\s*[Ee]\s*([+-]?\d+))?\s*(.*)$/
const nonDecimal = /^#(?:[Hh]([0-9A-Fa-f]+)|[Qq]([0-7]+)|[Bb]([01]+))$/

/** Splits at a separator outside quotes and parentheses. Throws ScpiError -151 or -171 where one is left open. */
export function splitOutside(text: string, separator: ';' | ','): string[] {
  const parts: string[] = []
  let start = 0
  let quote = ''
  let depth = 0
  for (let index = 0; index < text.length; index++) {
    const character = text[index] as string
    if (quote !== '') {
      if (character === quote) quote = ''
    } else if (character === '"' || character === "'") quote = character
    else if (character === '(') depth++
    else if (character === ')') depth--
    else if (character === separator && depth === 0) {
      parts.push(text.slice(start, index))
      start = index + 1
    }
  }
  if (quote !== '') throw new ScpiError(-151)
  if (depth !== 0) throw new ScpiError(-171)
  parts.push(text.slice(start))
  return parts
}

/** Reads one unit of a program message. Throws a ScpiError of the command error class. */
export function parseUnit(text: string): Unit {
  const trimmed = text.trim()
  if (trimmed === '') throw new ScpiError(-102)
  const gap = trimmed.search(/\s/)
  const header = gap === -1 ? trimmed : trimmed.slice(0, gap)
  const rest = gap === -1 ? '' : trimmed.slice(gap).trim()
  checkHeader(header)
  const isQuery = header.endsWith('?')
  const isCommon = header.startsWith('*')
  const body = header.replace(/^[:*]/, '').replace(/\?$/, '')
  const mnemonics = body.toUpperCase().split(':')
  if (mnemonics.some((mnemonic) => mnemonic.length > mnemonicLimit)) throw new ScpiError(-112)
  const parameters = rest === '' ? [] : splitOutside(rest, ',').map((part) => parseParameter(part.trim()))
  return { isCommon, isRooted: header.startsWith(':'), isQuery, mnemonics, parameters }
}

function checkHeader(header: string): void {
  if (commonHeader.test(header) || compoundHeader.test(header)) return
  if (/^[:*\w]+\??[("'#,]/.test(header)) throw new ScpiError(-111)
  throw new ScpiError(/[^:*?\w]/.test(header) ? -101 : -102)
}

function parseParameter(text: string): Parameter {
  if (text === '') throw new ScpiError(-102)
  if (/^["']/.test(text)) return parseString(text)
  if (text.startsWith('(')) {
    if (!text.endsWith(')')) throw new ScpiError(-103)
    return { kind: 'expression', text }
  }
  if (text.startsWith('#')) return parseHash(text)
  if (/^[A-Za-z]/.test(text)) {
    if (/\s/.test(text)) throw new ScpiError(-103)
    if (!/^\w+$/.test(text)) throw new ScpiError(-141)
    if (text.length > mnemonicLimit) throw new ScpiError(-144)
    return { kind: 'word', text: text.toUpperCase() }
  }
  if (/^[+\-.\d]/.test(text)) return parseNumber(text)
  throw new ScpiError(-101)
}

function parseString(text: string): Parameter {
  const quote = text[0] as string
  const inner = text.slice(1, -1)
  if (text.length < 2 || !text.endsWith(quote)) throw new ScpiError(-103)
  if (inner.replaceAll(quote + quote, '').includes(quote)) throw new ScpiError(-151)
  return { kind: 'string', text: inner.replaceAll(quote + quote, quote) }
}

function parseHash(text: string): Parameter {
  const match = nonDecimal.exec(text)
  if (match) {
    const [, hexadecimal, octal, binary] = match
    const value = hexadecimal
      ? Number.parseInt(hexadecimal, 16)
      : octal
        ? Number.parseInt(octal, 8)
        : Number.parseInt(binary ?? '', 2)
    return { kind: 'number', value, suffix: '' }
  }
  if (/^#\d/.test(text)) return { kind: 'block' }
  throw new ScpiError(/^#[HhQqBb]/.test(text) ? -121 : -161)
}

function parseNumber(text: string): Parameter {
  const match = decimal.exec(text)
  if (!match) throw new ScpiError(-121)
  const [, mantissa = '', exponent = '0', suffix = ''] = match
  if (mantissa.replace(/^[+-]?0*/, '').length > 255) throw new ScpiError(-124)
  if (Math.abs(Number(exponent)) > 32_000) throw new ScpiError(-123)
  if (suffix !== '') {
    if (/^[.+-]/.test(suffix)) throw new ScpiError(-121)
    if (/^[\d("'#]/.test(suffix)) throw new ScpiError(-103)
    if (!/^[A-Za-z/%]+$/.test(suffix)) throw new ScpiError(-131)
    if (suffix.length > mnemonicLimit) throw new ScpiError(-134)
  }
  return { kind: 'number', value: Number(`${mantissa}e${exponent}`), suffix: suffix.toUpperCase() }
}
