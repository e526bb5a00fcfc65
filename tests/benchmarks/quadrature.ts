/**
 * Adaptive quadrature for general use: the interval with the largest error is halved until the sum of the errors is
 * small enough, with the Gauss-Kronrod rule of 7 and 15 points in each. The rule and its error estimate are those of
 * QUADPACK's QAG (Piessens and others, 1983).
 *
 * @returns the integral to a relative error of `relative`
 */
export function integrate(f: (x: number) => number, low: number, high: number, relative: number): number {
  const parts = [kronrod(f, low, high)]
  let total = parts[0]?.value as number
  let error = parts[0]?.error as number
  while (error > relative * Math.abs(total) && parts.length < 500) {
    let worst = 0
    for (let i = 1; i < parts.length; i++) {
      if ((parts[i] as Part).error > (parts[worst] as Part).error) worst = i
    }
    const part = parts[worst] as Part
    const middle = (part.low + part.high) / 2
    const [left, right] = [kronrod(f, part.low, middle), kronrod(f, middle, part.high)]
    parts[worst] = left
    parts.push(right)
    total += left.value + right.value - part.value
    error += left.error + right.error - part.error
  }
  return total
}

type Part = { low: number; high: number; value: number; error: number }

const NODES = [
  0.9914553711208126, 0.9491079123427585, 0.8648644233597691, 0.7415311855993945, 0.5860872354676911,
  0.4058451513773972, 0.20778495500789848,
]
const KRONROD = [
  0.022935322010529224, 0.06309209262997856, 0.10479001032225019, 0.14065325971552592, 0.1690047266392679,
  0.19035057806478542, 0.20443294007529889,
]
const KRONROD_CENTRE = 0.20948214108472782
/** Weights at every second node. */
const GAUSS = [0.1294849661688697, 0.27970539148927664, 0.3818300505051189]
const GAUSS_CENTRE = 0.4179591836734694

function kronrod(f: (x: number) => number, low: number, high: number): Part {
  const centre = (low + high) / 2
  const half = (high - low) / 2
  const middle = f(centre)
  const values: number[] = []
  let fine = KRONROD_CENTRE * middle
  let coarse = GAUSS_CENTRE * middle
  let absolute = KRONROD_CENTRE * Math.abs(middle)
  for (let i = 0; i < NODES.length; i++) {
    const x = half * (NODES[i] as number)
    const [below, above] = [f(centre - x), f(centre + x)]
    values.push(below, above)
    fine += (KRONROD[i] as number) * (below + above)
    absolute += (KRONROD[i] as number) * (Math.abs(below) + Math.abs(above))
    if (i % 2 === 1) coarse += (GAUSS[i >> 1] as number) * (below + above)
  }
  const mean = fine / 2
  let spread = KRONROD_CENTRE * Math.abs(middle - mean)
  for (let i = 0; i < NODES.length; i++) {
    const around = Math.abs((values[2 * i] as number) - mean) + Math.abs((values[2 * i + 1] as number) - mean)
    spread += (KRONROD[i] as number) * around
  }
  spread *= Math.abs(half)
  let error = Math.abs((fine - coarse) * half)
  if (spread > 0 && error > 0) error = spread * Math.min(1, ((200 * error) / spread) ** 1.5)
  return { low, high, value: fine * half, error: Math.max(error, 50 * 2 ** -53 * absolute * Math.abs(half)) }
}
