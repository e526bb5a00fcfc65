/**
 * Repeatable random numbers: the generator xoshiro128**, with a period of 2¹²⁸ − 1. The same seed gives the
 * same numbers everywhere.
 *
 * Source: D. Blackman and S. Vigna, Scrambled linear pseudorandom number generators, ACM Trans. Math.
 * Softw. 47 (2021) 36.
 */
export class RandomNumbers {
  readonly #state: Int32Array
  #spare = 0
  #hasSpare = false

  /**
   * @param seed whole number from 0 to 2⁵³ − 1, or the four 32-bit words of the state, not all zero
   * @throws RangeError naming `seed`
   */
  constructor(seed: number | readonly [number, number, number, number]) {
    if (typeof seed === 'number') {
      if (!Number.isSafeInteger(seed) || seed < 0) {
        throw new RangeError(`seed must be a whole number from 0 to 2^53 - 1, got ${seed}`)
      }
      const [low, high] = [spread(seed | 0), spread(Math.floor(seed / 2 ** 32) ^ 0x5bd1e995)]
      this.#state = Int32Array.of(low(), low(), high(), high())
    } else {
      this.#state = Int32Array.from(seed)
    }
    if (this.#state.every((word) => word === 0)) throw new RangeError('seed must not be all zero')
  }

  /** A whole number from 0 to 2³² − 1. */
  word(): number {
    const s = this.#state
    const s1 = s[1] as number
    const scrambled = Math.imul(s1, 5)
    const s2 = (s[2] as number) ^ (s[0] as number)
    const s3 = (s[3] as number) ^ s1
    s[1] = s1 ^ s2
    s[0] = (s[0] as number) ^ s3
    s[2] = s2 ^ (s1 << 9)
    s[3] = (s3 << 11) | (s3 >>> 21)
    return Math.imul((scrambled << 7) | (scrambled >>> 25), 9) >>> 0
  }

  /** Uniform between 0 and 1, neither of which it takes, in steps of 2⁻⁵². */
  uniform(): number {
    return ((this.word() >>> 6) * 2 ** 26 + (this.word() >>> 6) + 0.5) / 2 ** 52
  }

  /** Standard normal. Source: the polar form of the method of Box and Muller, as JCGM 101:2008, C.4, has it. */
  normal(): number {
    if (this.#hasSpare) {
      this.#hasSpare = false
      return this.#spare
    }
    for (;;) {
      const u = ((this.word() | 0) + 0.5) / 2 ** 31
      const v = ((this.word() | 0) + 0.5) / 2 ** 31
      const square = u * u + v * v
      if (square >= 1) continue
      const factor = Math.sqrt((-2 * Math.log(square)) / square)
      this.#spare = v * factor
      this.#hasSpare = true
      return u * factor
    }
  }

  /**
   * χ² over its degrees of freedom.
   *
   * @param degreesOfFreedom real, above 2/3
   *
   * Source: G. Marsaglia and W. W. Tsang, A simple method for generating gamma variables, ACM Trans. Math.
   * Softw. 26 (2000) 363.
   */
  chiSquaredRatio(degreesOfFreedom: number): number {
    const d = degreesOfFreedom / 2 - 1 / 3
    const c = 1 / Math.sqrt(9 * d)
    for (;;) {
      const x = this.normal()
      const root = 1 + c * x
      if (root <= 0) continue
      const v = root * root * root
      const u = this.uniform()
      const square = x * x
      if (u < 1 - 0.0331 * square * square || Math.log(u) < square / 2 + d * (1 - v + Math.log(v))) {
        return (2 * d * v) / degreesOfFreedom
      }
    }
  }
}

/** Words that differ in half of their bits for neighbouring starts (splitmix32). */
function spread(start: number): () => number {
  let state = start
  return () => {
    state = (state + 0x9e3779b9) | 0
    let word = state
    word = Math.imul(word ^ (word >>> 16), 0x85ebca6b)
    word = Math.imul(word ^ (word >>> 13), 0xc2b2ae35)
    return word ^ (word >>> 16)
  }
}
