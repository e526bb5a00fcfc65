export type Values = readonly (number | null)[]

const mostReadings = 3

/**
 * Guards against a digit that was damaged into another digit, which no line without parity can show: a value that
 * differs from the last one by more than its tolerance counts only once a second one agrees with it. Values that keep
 * disagreeing are null, which claims nothing and needs no confirmation. A steady value costs nothing.
 */
export class Confirmed {
  readonly #tolerances: readonly number[]
  #last: Values

  /** One tolerance a value, in its unit; below it a damaged value is not noticed. */
  constructor(tolerances: readonly number[]) {
    this.#tolerances = tolerances
    this.#last = tolerances.map(() => null)
  }

  /** Asks once while all values are near the last ones, otherwise up to three times. Rejects as `ask` does. */
  async read(ask: () => Promise<Values>): Promise<(number | null)[]> {
    const accepted: (number | null | undefined)[] = this.#tolerances.map(() => undefined)
    let earlier = this.#last
    for (let reading = 0; reading < mostReadings && accepted.includes(undefined); reading++) {
      const values = await ask()
      this.#tolerances.forEach((tolerance, index) => {
        if (accepted[index] !== undefined) return
        const value = values[index] ?? null
        const before = earlier[index] ?? null
        if (value === null || (before !== null && Math.abs(value - before) <= tolerance))
          accepted[index] = value
      })
      earlier = values
    }
    const read = accepted.map((value) => value ?? null)
    this.#last = read.map((value, index) => value ?? this.#last[index] ?? null)
    return read
  }
}
