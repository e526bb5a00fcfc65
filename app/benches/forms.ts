import * as z from 'zod'
import { numberField } from './number-field.ts'

/** What a form or a button on the bench page may ask. Limits are the bridge's to judge; here only what was typed is read. */
export const commandFormSchema = z.discriminatedUnion(
  'kind',
  [
    z.object({ kind: z.literal('take-controls') }),
    z.object({ kind: z.literal('take-over') }),
    z.object({
      kind: z.literal('hand-over'),
      toPersonId: z
        .string({ error: 'Choose to whom the controls go.' })
        .min(1, 'Choose to whom the controls go.'),
    }),
    z.object({ kind: z.literal('release-controls') }),
    z.object({
      kind: z.literal('switch-heater'),
      on: z
        .enum(['true', 'false'], { error: 'The heater is switched on or off.' })
        .transform((on) => on === 'true'),
    }),
    z.object({ kind: z.literal('set-anode'), volts: numberField('the anode voltage', 'volts') }),
    z.object({ kind: z.literal('set-coils'), amps: numberField('the coil current', 'amperes') }),
    z.object({
      kind: z.literal('set-polarity'),
      polarity: z
        .enum(['1', '-1'], { error: 'The polarity is 1 or -1.' })
        .transform((polarity) => (polarity === '1' ? (1 as const) : (-1 as const))),
    }),
    z.object({ kind: z.literal('reset-trip') }),
    z.object({ kind: z.literal('make-safe') }),
  ],
  { error: 'This is not a command of a bench.' },
)
export type CommandForm = z.infer<typeof commandFormSchema>
