export type QuadratureRule = { readonly nodes: Float64Array; readonly weights: Float64Array }

const rules = new Map<number, QuadratureRule>()

/**
 * Gauss-Legendre nodes and weights on [−1, 1], computed once for each order.
 *
 * @param order number of points, 1 to 200
 * @throws RangeError naming `order`
 */
export function gaussLegendre(order: number): QuadratureRule {
  const known = rules.get(order)
  if (known) return known
  if (!Number.isInteger(order) || order < 1 || order > 200) {
    throw new RangeError(`order must be a whole number from 1 to 200, got ${order}`)
  }
  const nodes = new Float64Array(order)
  const weights = new Float64Array(order)
  for (let i = 0; i < order; i++) {
    let x = -Math.cos((Math.PI * (i + 0.75)) / (order + 0.5))
    let slope = 1
    for (let iteration = 0; iteration < 100; iteration++) {
      const { value, derivative } = legendre(order, x)
      slope = derivative
      const step = value / derivative
      x -= step
      if (Math.abs(step) < 1e-16) break
    }
    slope = legendre(order, x).derivative
    nodes[i] = x
    weights[i] = 2 / ((1 - x * x) * slope * slope)
  }
  const rule = { nodes, weights }
  rules.set(order, rule)
  return rule
}

function legendre(order: number, x: number): { value: number; derivative: number } {
  let previous = 1
  let current = x
  for (let n = 2; n <= order; n++) {
    const next = ((2 * n - 1) * x * current - (n - 1) * previous) / n
    previous = current
    current = next
  }
  return { value: current, derivative: (order * (x * current - previous)) / (x * x - 1) }
}
