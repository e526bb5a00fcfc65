import { vacuumPermeability } from './constants.ts'
import { requireFinite, requireNotNegative, requirePositive } from './domain.ts'
import { gaussLegendre } from './gauss-legendre.ts'

/** One coil. Radius is that of the mean turn; width is along the axis, depth along the radius. */
export type Coil = {
  turns: number
  radiusMetres: number
  windingWidthMetres?: number
  windingDepthMetres?: number
}

/** `coils[0]` has its mean plane at z = −separation/2, `coils[1]` at +separation/2. */
export type CoilPair = { coils: [Coil, Coil]; separationMetres: number }

export type FieldComponents = { radial: number; axial: number }

type LoopSum = { radial: number; axial: number; potential: number }

const MU_0 = vacuumPermeability.value
const MOST_SECTION_POINTS = 48

/**
 * @throws RangeError naming the argument: turns, radii and separation must be positive, widths and depths
 *   not negative, and a winding must not reach the axis
 */
export function requireCoilPair(pair: CoilPair): void {
  requirePositive('separationMetres', pair.separationMetres)
  for (let i = 0; i < 2; i++) {
    const coil = pair.coils[i]
    if (!coil) throw new RangeError('coils must hold two coils')
    if (!(coil.turns > 0 && coil.turns < Number.POSITIVE_INFINITY)) {
      throw new RangeError(`coils[${i}].turns must be positive and finite, got ${coil.turns}`)
    }
    if (!(coil.radiusMetres > 0 && coil.radiusMetres < Number.POSITIVE_INFINITY)) {
      throw new RangeError(`coils[${i}].radiusMetres must be positive and finite, got ${coil.radiusMetres}`)
    }
    const width = coil.windingWidthMetres ?? 0
    const depth = coil.windingDepthMetres ?? 0
    if (width !== 0) requireNotNegative(`coils[${i}].windingWidthMetres`, width)
    if (depth !== 0) requireNotNegative(`coils[${i}].windingDepthMetres`, depth)
    if (depth >= 2 * coil.radiusMetres) {
      throw new RangeError(`coils[${i}].windingDepthMetres must be below twice the mean radius, got ${depth}`)
    }
  }
}

/**
 * Field at the centre of the pair, on the axis midway between the mean planes.
 *
 * @param currentAmps current through each coil; positive gives a positive axial field
 * @returns axial field in tesla
 * @throws RangeError naming the argument
 *
 * Source: B = μ₀NIR²/2(R² + s²/4)^{3/2} for each coil, integrated over the winding section.
 */
export function centreFieldTesla(pair: CoilPair, currentAmps: number): number {
  return fieldTesla(pair, currentAmps, 0, 0).axial
}

/**
 * Field anywhere outside the windings.
 *
 * @param currentAmps current through each coil
 * @param rhoMetres distance from the coil axis
 * @param zMetres distance along the axis from the mid-plane
 * @returns radial (away from the axis) and axial components in tesla
 * @throws RangeError naming the argument, also for a point on or in a winding
 *
 * Source: loop field by complete elliptic integrals (Smythe, Static and Dynamic Electricity, 7.10),
 * written in the terms of the arithmetic-geometric mean so that nothing cancels near the axis.
 */
export function fieldTesla(
  pair: CoilPair,
  currentAmps: number,
  rhoMetres: number,
  zMetres: number,
): FieldComponents {
  const sum = sumOverPair(pair, currentAmps, rhoMetres, zMetres)
  return { radial: sum.radial, axial: sum.axial }
}

/**
 * Azimuthal component of the vector potential, zero on the axis (so that 2πρA is the flux through the
 * circle of radius ρ).
 *
 * @returns A_φ in tesla metres
 * @throws RangeError naming the argument, also for a point on or in a winding
 */
export function vectorPotentialTeslaMetres(
  pair: CoilPair,
  currentAmps: number,
  rhoMetres: number,
  zMetres: number,
): number {
  return sumOverPair(pair, currentAmps, rhoMetres, zMetres).potential
}

function sumOverPair(pair: CoilPair, currentAmps: number, rhoMetres: number, zMetres: number): LoopSum {
  requireCoilPair(pair)
  requireFinite('currentAmps', currentAmps)
  requireNotNegative('rhoMetres', rhoMetres)
  requireFinite('zMetres', zMetres)
  const sum: LoopSum = { radial: 0, axial: 0, potential: 0 }
  addCoil(sum, pair.coils[0], currentAmps, rhoMetres, zMetres + pair.separationMetres / 2)
  addCoil(sum, pair.coils[1], currentAmps, rhoMetres, zMetres - pair.separationMetres / 2)
  return sum
}

function addCoil(sum: LoopSum, coil: Coil, currentAmps: number, rho: number, z: number): void {
  const halfWidth = (coil.windingWidthMetres ?? 0) / 2
  const halfDepth = (coil.windingDepthMetres ?? 0) / 2
  const ampTurns = coil.turns * currentAmps
  if (halfWidth === 0 && halfDepth === 0) {
    addLoop(sum, ampTurns, coil.radiusMetres, rho, z)
    return
  }
  const acrossDepth = Math.abs(rho - coil.radiusMetres)
  const alongWidth = Math.abs(z)
  if (acrossDepth <= halfDepth && alongWidth <= halfWidth) {
    throw new RangeError(`rhoMetres and zMetres must lie outside the windings, got ${rho} and ${z} inside`)
  }
  const widthRule = gaussLegendre(sectionPoints(halfWidth, alongWidth, acrossDepth - halfDepth))
  const depthRule = gaussLegendre(sectionPoints(halfDepth, acrossDepth, alongWidth - halfWidth))
  for (let i = 0; i < depthRule.nodes.length; i++) {
    const radius = coil.radiusMetres + halfDepth * (depthRule.nodes[i] as number)
    const part = (ampTurns * (depthRule.weights[i] as number)) / 4
    for (let j = 0; j < widthRule.nodes.length; j++) {
      const offset = halfWidth * (widthRule.nodes[j] as number)
      addLoop(sum, part * (widthRule.weights[j] as number), radius, rho, z - offset)
    }
  }
}

/**
 * Points needed for about 1e-14 along one side of the section: the quadrature converges as b^(−2n), b
 * being the sum of the half-axes of the ellipse with foci at the side's ends through the field point.
 */
function sectionPoints(halfSide: number, along: number, across: number): number {
  if (halfSide === 0) return 1
  const x = along / halfSide
  const y = Math.max(across, 0) / halfSide
  const halfAxis = (Math.hypot(x + 1, y) + Math.hypot(x - 1, y)) / 2
  const ellipse = halfAxis + Math.sqrt(Math.max(halfAxis * halfAxis - 1, 0))
  const points = Math.ceil(16.2 / Math.log(Math.max(ellipse, 1.0001)))
  return Math.min(Math.max(points, 2), MOST_SECTION_POINTS)
}

/**
 * Adds one circular loop. With the sequence aₙ, cₙ of the arithmetic-geometric mean for the parameter
 * m = 4Rρ/β² and T = Σₙ₌₁ 2ⁿ⁻¹cₙ², the integrals are K = π/2a and E = K(1 − m/2 − T). All three sums
 * are formed from T/ρ, which stays exact as ρ goes to zero, where (1 − m/2)K − E would cancel.
 */
function addLoop(sum: LoopSum, ampTurns: number, radius: number, rho: number, z: number): void {
  const outer = radius + rho
  const inner = radius - rho
  const zSquared = z * z
  const betaSquared = outer * outer + zSquared
  const alphaSquared = inner * inner + zSquared
  if (alphaSquared === 0) {
    throw new RangeError(`rhoMetres and zMetres must lie outside the windings, got ${rho} and ${z} on a turn`)
  }
  const beta = Math.sqrt(betaSquared)
  const kc = Math.sqrt(alphaSquared / betaSquared)
  let a = (1 + kc) / 2
  let b = Math.sqrt(kc)
  let cOverRho = radius / (betaSquared * a)
  let c = rho * cOverRho
  let weight = 1
  let tOverRho = c * cOverRho
  while (c > 4e-9 * a) {
    const next = (a + b) / 2
    b = Math.sqrt(a * b)
    cOverRho *= c / (4 * next)
    c = rho * cOverRho
    a = next
    weight *= 2
    tOverRho += weight * c * cOverRho
  }
  const scale = (MU_0 * ampTurns) / (4 * a)
  const perField = scale / (beta * alphaSquared)
  const rhoSquared = rho * rho
  const radiusSquared = radius * radius
  sum.axial +=
    perField *
    (2 * radius * inner -
      (radiusSquared - rhoSquared - zSquared) * rho * ((2 * radius) / betaSquared + tOverRho))
  sum.radial +=
    perField *
    z *
    ((4 * radiusSquared * rho) / betaSquared - (radiusSquared + rhoSquared + zSquared) * tOverRho)
  sum.potential += scale * beta * tOverRho
}
