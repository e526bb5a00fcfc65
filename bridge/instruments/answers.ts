// IEEE 488.2-1992, 8.7.2 to 8.7.4: NR1 integers, NR2 fixed point, NR3 with an exponent. NR2 has digits on both sides.
const numeric = /^[+-]?\d{1,12}(?:\.\d{1,12})?(?:E[+-]?\d{1,3})?$/i

// SCPI-1999 volume 1, 7.2.1.4 and 7.2.1.5: infinity is 9.9E37, not-a-number 9.91E37.
const notAReading = 9.9e37

/** One number as an instrument writes it; undefined for text that is no number, null for infinity and not-a-number. */
function parseElement(text: string): number | null | undefined {
  const trimmed = text.trim()
  if (!numeric.test(trimmed)) return undefined
  const value = Number(trimmed)
  return Math.abs(value) >= notAReading ? null : value
}

/**
 * A comma-separated list of exactly `count` numbers. An infinity or not-a-number in it is null in its place.
 * A wrong count, or anything that is not a number, makes the whole answer null.
 */
export function parseNumbers(answer: string, count: number): (number | null)[] | null {
  const elements = answer.split(',')
  if (elements.length !== count) return null
  const values: (number | null)[] = []
  for (const element of elements) {
    const value = parseElement(element)
    if (value === undefined) return null
    values.push(value)
  }
  return values
}

/** A list of exactly `count` booleans as SCPI answers them, `0` or `1`; anything else is null. */
export function parseBooleans(answer: string, count: number): boolean[] | null {
  const elements = answer.split(',').map((element) => element.trim())
  if (elements.length !== count || !elements.every((element) => element === '0' || element === '1'))
    return null
  return elements.map((element) => element === '1')
}

/**
 * An entry of the error queue, `-222,"Data out of range"`. Number and text must agree on whether there was an error,
 * so that a damaged digit does not turn a refusal into a success; otherwise null.
 */
export function parseErrorEntry(answer: string): { number: number; text: string } | null {
  const match = /^([+-]?\d{1,5}),"([^"]*)"$/.exec(answer.trim())
  if (!match) return null
  const number = Number(match[1])
  const text = match[2] ?? ''
  if ((number === 0) !== /^no error/i.test(text)) return null
  return { number: number === 0 ? 0 : number, text }
}
