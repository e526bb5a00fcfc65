/** A seeded generator of its own for each use, so that one part's draws do not shift another's. */
export class Random {
  #state: number
  #spare: number | null = null

  constructor(seed: number, name: string) {
    let hash = 2_166_136_261 ^ seed
    for (const character of name) hash = Math.imul(hash ^ character.charCodeAt(0), 16_777_619)
    this.#state = hash >>> 0
  }

  /** Uniform in [0, 1). */
  uniform(): number {
    this.#state = (this.#state + 0x6d2b79f5) >>> 0
    let word = Math.imul(this.#state ^ (this.#state >>> 15), this.#state | 1)
    word ^= word + Math.imul(word ^ (word >>> 7), word | 61)
    return ((word ^ (word >>> 14)) >>> 0) / 4_294_967_296
  }

  /** Uniform in [-1, 1). */
  symmetric(): number {
    return 2 * this.uniform() - 1
  }

  /** Normal with mean 0 and standard deviation 1. */
  normal(): number {
    if (this.#spare !== null) {
      const spare = this.#spare
      this.#spare = null
      return spare
    }
    const radius = Math.sqrt(-2 * Math.log(1 - this.uniform()))
    const angle = 2 * Math.PI * this.uniform()
    this.#spare = radius * Math.sin(angle)
    return radius * Math.cos(angle)
  }
}
