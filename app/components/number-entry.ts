/** A number as it was typed, with a comma or a point; null for an empty field, NaN for what is no number. */
export function readNumber(text: string): number | null {
  const plain = text.trim().replace('\u2212', '-').replace(',', '.')
  if (plain === '') return null
  return /^[+-]?(\d+\.?\d*|\.\d+)$/.test(plain) ? Number(plain) : Number.NaN
}

type Step = { text: string; step: number; decimals: number; limit: number; direction: 1 | -1 }

/** The text of a field one step further, on the grid of the step and between zero and the limit. */
export function stepNumber({ text, step, decimals, limit, direction }: Step): string {
  const now = readNumber(text)
  const start = now === null || Number.isNaN(now) ? 0 : now
  const slots = start / step
  const slack = 1e-6
  const next = direction === 1 ? Math.floor(slots + slack) + 1 : Math.ceil(slots - slack) - 1
  return Math.min(limit, Math.max(0, next * step)).toFixed(decimals)
}
