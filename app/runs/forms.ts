import * as z from 'zod'
import { numberField } from '../benches/number-field.ts'

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

export const strikeFormSchema = z.object({
  reason: z
    .string({ error: 'Say why this reading is struck.' })
    .trim()
    .min(3, 'Say why this reading is struck, in a few words.')
    .max(300, 'At most 300 characters.'),
})
