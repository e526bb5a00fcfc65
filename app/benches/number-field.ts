import * as z from 'zod'
import { lastDigitOf } from '../metrology/last-digit.ts'

const wholeNumber = /^[+-]?(\d+([.,]\d*)?|[.,]\d+)(e[+-]?\d+)?$/i
const leadingNumber = /^[+-]?(\d+([.,]\d*)?|[.,]\d+)/

/**
 * A number typed into a field, with a point or a comma as the decimal mark. Nothing is guessed: a unit behind the number,
 * a second mark, a word or an empty field is an error that says what to type.
 * @param what the quantity with its article, as in 'the anode voltage'
 * @param unit the unit's name in the plural, as in 'volts'
 */
export const numberField = (what: string, unit: string) =>
  z.string({ error: `Type ${what} in ${unit}.` }).transform((typed, context) => {
    const text = typed.trim().replace('−', '-')
    const fail = (message: string) => {
      context.issues.push({ code: 'custom', message, input: typed })
      return z.NEVER
    }
    if (text === '') return fail(`Type ${what} in ${unit}.`)
    const shown = text.length > 20 ? `${text.slice(0, 20)}…` : text
    if (!wholeNumber.test(text))
      return leadingNumber.test(text) && !/[.,].*[.,]/.test(text)
        ? fail(`Type only the number of ${unit}: “${shown}” has something behind it.`)
        : fail(`“${shown}” is not a number. Type ${what} in ${unit}, as in 1.5 or 1,5.`)
    const value = Number(text.replace(',', '.'))
    return Number.isFinite(value) ? value : fail(`“${shown}” is too large to be ${what}.`)
  })

/** A number off a display, with the size of the last digit that was typed of it: what it shows, zeros at the end too. */
export const writtenNumberField = (what: string, unit: string) => {
  const field = numberField(what, unit)
  return z.string({ error: `Type ${what} in ${unit}.` }).transform((typed, context) => {
    const { data, error } = field.safeParse(typed)
    if (data !== undefined) return { value: data, lastDigit: lastDigitOf(typed) }
    for (const { message } of error?.issues ?? [])
      context.issues.push({ code: 'custom', message, input: typed })
    return z.NEVER
  })
}
