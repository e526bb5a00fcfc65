import * as z from 'zod'
import { numberField, writtenNumberField } from '../benches/number-field.ts'
import type { TypedBench } from '../protocol/bench-config.ts'

/** A tenth of a micrometre: no reader tells more, and 7.35 cm is then stored as exactly 0.0735 m. */
const metres = (centimetres: number) => Math.round(centimetres * 1e5) / 1e7

/** The two scale readings as typed in centimetres, read as metres from the scale's zero mark. */
export const edgesFormSchema = (scaleLengthMetres: number) => {
  const centimetres = +(scaleLengthMetres * 100).toFixed(5)
  const edge = (what: string) =>
    numberField(what, 'centimetres').refine((read) => read >= 0 && read <= centimetres, {
      error: `The scale goes from 0 to ${centimetres} cm.`,
    })
  return z
    .object({ left: edge('the left edge'), right: edge('the right edge') })
    .refine(({ left, right }) => right > left, {
      path: ['right'],
      error: 'The right edge has to stand to the right of the left edge.',
    })
    .transform(({ left, right }) => ({ leftMetres: metres(left), rightMetres: metres(right) }))
}

/** Which rung the beam was made to meet, and how far the current could be moved to either side before it no longer did. */
export const rungFormSchema = (names: string[]) =>
  z.object({
    rung: z.string({ error: 'Choose the rung that the beam meets.' }).refine((name) => names.includes(name), {
      error: 'Choose the rung that the beam meets.',
    }),
    halfWidth: z
      .literal('')
      .optional()
      .transform(() => null)
      .or(
        numberField('how far the current can be moved', 'amperes').refine((amps) => amps >= 0 && amps < 1, {
          error: 'How far the current can be moved is between 0 and 1 A.',
        }),
      ),
  })

const within = (limit: number) => (written: { value: number }) => written.value > 0 && written.value <= limit
const beyond = (what: string, limit: number, unit: string) => ({
  error: `${what} has to be above 0 and at most the bench's limit of ${limit} ${unit}. Read the meter again; if it does show that, turn it down first.`,
})

/** What the meters of a bench without ports show, with every digit. */
export const typedReadingFormSchema = ({ limits, reversal }: TypedBench) =>
  z.object({
    volts: writtenNumberField('the anode voltage', 'volts').refine(
      within(limits.anodeVolts),
      beyond('The anode voltage', limits.anodeVolts, 'V'),
    ),
    amps: writtenNumberField('the coil current', 'amperes').refine(
      within(limits.coilAmps),
      beyond('The coil current, without a sign,', limits.coilAmps, 'A'),
    ),
    polarity: z
      .enum(reversal === 'not' ? ['1'] : ['1', '-1'], { error: 'This bench has one sense of the current.' })
      .default('1')
      .transform((polarity) => (polarity === '1' ? 1 : -1)),
  })

export const strikeFormSchema = z.object({
  reason: z
    .string({ error: 'Say why this reading is struck.' })
    .trim()
    .min(3, 'Say why this reading is struck, in a few words.')
    .max(300, 'At most 300 characters.'),
})
