import { requireProbability } from './domain.ts'

/**
 * Quantile of the standard normal distribution, to about 1e-15.
 *
 * @param p cumulative probability, 0 < p < 1
 * @throws RangeError naming `p`
 *
 * Source: M. J. Wichura, Algorithm AS 241, Appl. Statist. 37 (1988) 477.
 */
export function normalQuantile(p: number): number {
  requireProbability('p', p)
  const q = p - 0.5
  if (Math.abs(q) <= 0.425) return q * ratio(0.180625 - q * q, NORMAL_CENTRE)
  const r = Math.sqrt(-Math.log(Math.min(p, 1 - p)))
  const z = r <= 5 ? ratio(r - 1.6, NORMAL_MIDDLE) : ratio(r - 5, NORMAL_FAR)
  return q < 0 ? -z : z
}

type Ratio = readonly [numerator: readonly number[], denominator: readonly number[]]

/** Coefficients from the highest power down. */
const NORMAL_CENTRE: Ratio = [
  [
    2509.0809287301227, 33430.57558358813, 67265.7709270087, 45921.95393154987, 13731.69376550946,
    1971.5909503065513, 133.14166789178438, 3.3871328727963665,
  ],
  [
    5226.495278852854, 28729.085735721943, 39307.89580009271, 21213.794301586597, 5394.196021424751,
    687.1870074920579, 42.31333070160091, 1,
  ],
]
const NORMAL_MIDDLE: Ratio = [
  [
    0.0007745450142783414, 0.022723844989269184, 0.2417807251774506, 1.2704582524523684, 3.6478483247632045,
    5.769497221460691, 4.630337846156546, 1.4234371107496835,
  ],
  [
    1.0507500716444169e-9, 0.0005475938084995345, 0.015198666563616457, 0.14810397642748008, 0.6897673349851,
    1.6763848301838038, 2.053191626637759, 1,
  ],
]
const NORMAL_FAR: Ratio = [
  [
    2.0103343992922881e-7, 2.7115555687434876e-5, 0.0012426609473880784, 0.026532189526576124,
    0.29656057182850487, 1.7848265399172913, 5.463784911164114, 6.657904643501103,
  ],
  [
    2.0442631033899397e-15, 1.421511758316446e-7, 1.8463183175100548e-5, 0.0007868691311456133,
    0.014875361290850615, 0.1369298809227358, 0.599832206555888, 1,
  ],
]

function ratio(x: number, [numerator, denominator]: Ratio): number {
  let above = 0
  let below = 0
  for (let i = 0; i < numerator.length; i++) {
    above = above * x + (numerator[i] as number)
    below = below * x + (denominator[i] as number)
  }
  return above / below
}
