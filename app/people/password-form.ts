import * as z from 'zod'

export const passwordSchema = z
  .object({
    current: z.string({ error: 'Type your present password.' }).max(1000, 'This is too long for a password.'),
    next: z
      .string({ error: 'Type the new password.' })
      .min(12, 'At least 12 characters: three or four words do well.')
      .max(200, 'At most 200 characters.'),
    again: z.string({ error: 'Type the new password once more.' }),
  })
  .refine((form) => form.next === form.again, {
    path: ['again'],
    message: 'This is not the same as the new password.',
  })
  .refine((form) => form.next !== form.current, { path: ['next'], message: 'This is the present password.' })
