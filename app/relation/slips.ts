import { evaluate } from './evaluate.ts'
import { type Expression, quantitiesIn } from './expression.ts'
import {
  chargeToMassAt,
  classicalChargeToMassAt,
  degreesOfFreedom,
  drawPoint,
  type Free,
  type Random,
  scaled,
} from './points.ts'
import type { Values } from './quantities.ts'

/** How a formula departs from the physics: the kind of slip, never by how much or which way. */
export type Slip =
  | { kind: 'sign' }
  | { kind: 'inverted' }
  | { kind: 'whole-power' }
  | { kind: 'field-power' }
  | { kind: 'absent'; quantities: Free[] }
  | { kind: 'wrong-side'; quantity: Free }
  | { kind: 'power'; quantity: Free }
  | { kind: 'shape'; quantity: Free | null }
  | { kind: 'diameter-for-radius' }
  | { kind: 'radius-for-diameter' }
  | { kind: 'coil-diameter' }
  | { kind: 'separation-for-radius' }
  | { kind: 'separation-with-radius' }
  | { kind: 'half-separation' }
  | { kind: 'coil-factor-forgotten' }
  | { kind: 'coil-factor-inverted' }
  | { kind: 'coil-factor' }
  | { kind: 'coil-factor-needless' }
  | { kind: 'factor' }
  | { kind: 'rounded' }

/** Of e/m: the relativistic part, which nobody is asked for, is below a third of it. */
export const agreementTolerance = 1e-3
const pointCount = 12
const slopePointCount = 4
const slopeFactor = 1.25
/** The relativistic part moves a slope by no more than a tenth of this. */
const slopeTolerance = 0.02

type Compared = { ratio: number; point: Values }

/** What a formula is compared to: the physics, or the physics with one slip made on purpose. */
type Standard = (point: Values) => number

/**
 * Compares a formula to the physics at settings drawn by chance.
 *
 * @returns no slips where it agrees to `agreementTolerance` at all of them
 * @throws FormulaProblem naming the place where it has no value at one of them
 */
export function findSlips(expression: Expression, random: Random): Slip[] {
  const used = quantitiesIn(expression)
  const isHelmholtz = !used.has('coilSeparation')
  const points = Array.from({ length: pointCount }, () => drawPoint(random, { isHelmholtz }))
  const compared = compare(expression, points, chargeToMassAt)
  if (agree(compared)) return []
  if (compared.every(({ ratio }) => ratio < 0))
    return [{ kind: 'sign' }, ...findSlips({ kind: 'negative', of: expression }, random)]
  if (!compared.every(({ ratio }) => ratio > 0)) return [{ kind: 'shape', quantity: null }]
  if (!isHelmholtz) {
    const slips = separationSlips(expression, points, random, used.has('coilRadius'))
    if (slips) return slips
  }
  const slopes = slopesOf(expression, points.slice(0, slopePointCount), isHelmholtz)
  if (slopes.every(({ slope }) => slope === 0)) return constantSlips(compared, expression)
  const whole = wholePowerOf(compared, slopes)
  if (whole !== null) return [{ kind: whole === -1 ? 'inverted' : 'whole-power' }]
  return slopeSlips(slopes, expression)
}

function compare(expression: Expression, points: readonly Values[], standard: Standard): Compared[] {
  return points.map((point) => ({ ratio: evaluate(expression, point) / standard(point), point }))
}

const agree = (compared: readonly Compared[]): boolean =>
  compared.every(({ ratio }) => Math.abs(ratio - 1) <= agreementTolerance)

function isConstant(values: readonly number[]): boolean {
  const largest = Math.max(...values)
  const smallest = Math.min(...values)
  return smallest > 0 && largest / smallest - 1 <= agreementTolerance
}

/** Slips that show where separation and radius of the coils differ, tried one by one; null where it is none of them. */
function separationSlips(
  expression: Expression,
  points: readonly Values[],
  random: Random,
  usesRadius: boolean,
): Slip[] | null {
  const equal = Array.from({ length: pointCount }, () => drawPoint(random, { isHelmholtz: true }))
  if (agree(compare(expression, equal, chargeToMassAt)))
    return [{ kind: usesRadius ? 'separation-with-radius' : 'separation-for-radius' }]
  const made: [Slip, Standard][] = [
    [
      { kind: 'separation-for-radius' },
      (it) =>
        classicalChargeToMassAt({ ...it, coilRadius: it.coilSeparation, coilSeparation: it.coilRadius }),
    ],
    [
      { kind: 'half-separation' },
      (it) => classicalChargeToMassAt({ ...it, coilSeparation: it.coilSeparation * 2 }),
    ],
    [
      { kind: 'half-separation' },
      (it) => classicalChargeToMassAt({ ...it, coilSeparation: it.coilSeparation / 2 }),
    ],
    [{ kind: 'coil-diameter' }, (it) => classicalChargeToMassAt({ ...it, coilRadius: it.coilRadius * 2 })],
    [{ kind: 'coil-diameter' }, (it) => classicalChargeToMassAt({ ...it, coilRadius: it.coilRadius / 2 })],
  ]
  const tried = made.map(([slip, standard]) => ({ slip, compared: compare(expression, points, standard) }))
  const exact = tried.find(({ compared }) => agree(compared))
  if (exact) return [exact.slip]
  const upToFactor = tried.find(({ compared }) => isConstant(compared.map(({ ratio }) => ratio)))
  return upToFactor ? [upToFactor.slip, { kind: 'factor' }] : null
}

/** The slope is null where it is not the same everywhere. */
type Slope = { quantity: Free; slope: number | null }

/** With which power of each quantity a formula departs from the physics. */
function slopesOf(expression: Expression, points: readonly Values[], isHelmholtz: boolean): Slope[] {
  const ratioAt = (point: Values) => Math.abs(evaluate(expression, point) / chargeToMassAt(point))
  const free = degreesOfFreedom.filter((quantity) => !(isHelmholtz && quantity === 'coilSeparation'))
  return free.map((quantity) => {
    const slopes = points.map((point) => {
      const moved = scaled(point, quantity, slopeFactor, { isHelmholtz })
      return Math.log(ratioAt(moved) / ratioAt(point)) / Math.log(slopeFactor)
    })
    const mean = slopes.reduce((sum, slope) => sum + slope, 0) / slopes.length
    if (!slopes.every((slope) => Math.abs(slope - mean) < slopeTolerance)) return { quantity, slope: null }
    return { quantity, slope: Math.abs(mean) < slopeTolerance ? 0 : mean }
  })
}

/** Powers with which each stands in e/m; of the coils' radius as long as the separation goes along. */
const powers: Partial<Record<Free, number>> = {
  anodeVoltage: 1,
  coilCurrent: -2,
  beamRadius: -2,
  turns: -2,
  coilRadius: 2,
  magneticConstant: -2,
}

/** The power of the right expression that a formula is, or null. */
function wholePowerOf(compared: readonly Compared[], slopes: readonly Slope[]): number | null {
  const ofVoltage = slopes.find(({ quantity }) => quantity === 'anodeVoltage')?.slope
  if (!ofVoltage) return null
  const whole = Math.round(6 * (1 + ofVoltage)) / 6
  if (whole === 0 || Math.abs(whole - 1 - ofVoltage) > slopeTolerance) return null
  const rests = compared.map(({ ratio, point }) => ratio * chargeToMassAt(point) ** (1 - whole))
  const smallest = Math.min(...rests)
  return smallest > 0 && Math.max(...rests) / smallest < 1 + slopeTolerance ? whole : null
}

const fieldQuantities: Free[] = ['coilCurrent', 'turns', 'magneticConstant']

function slopeSlips(slopes: readonly Slope[], expression: Expression): Slip[] {
  const used = quantitiesIn(expression)
  const isUsed = (quantity: Free) =>
    used.has(quantity) || (quantity === 'beamRadius' && used.has('beamDiameter'))
  const absent = slopes.filter(({ quantity, slope }) => slope !== 0 && !isUsed(quantity))
  const odd = slopes.filter(({ quantity, slope }) => slope !== 0 && isUsed(quantity))
  const slips: Slip[] =
    absent.length > 0 ? [{ kind: 'absent', quantities: absent.map(({ quantity }) => quantity) }] : []
  const field = odd.filter(({ quantity }) => fieldQuantities.includes(quantity))
  const [first] = field
  const isFieldOdd =
    field.length === fieldQuantities.length &&
    field.every(
      ({ slope }) => slope !== null && Math.abs(slope - (first?.slope ?? Number.NaN)) < slopeTolerance,
    )
  if (isFieldOdd) {
    const others = odd.filter(
      ({ quantity }) =>
        !fieldQuantities.includes(quantity) && !['coilRadius', 'coilSeparation'].includes(quantity),
    )
    return [...slips, { kind: 'field-power' }, ...others.map(slopeSlip)]
  }
  return [...slips, ...odd.map(slopeSlip)]
}

function slopeSlip({ quantity, slope }: Slope): Slip {
  if (slope === null) return { kind: 'shape', quantity }
  const power = powers[quantity]
  const isTurned = power !== undefined && Math.abs(slope + 2 * power) < slopeTolerance
  return { kind: isTurned ? 'wrong-side' : 'power', quantity }
}

/** What a factor that is the same everywhere comes from: halves and doubles, and powers of (4/5)^(3/2). */
function constantSlips(compared: readonly Compared[], expression: Expression): Slip[] {
  const factor = compared.reduce((sum, { ratio }) => sum + ratio, 0) / compared.length
  if (Math.abs(factor - 1) < 0.02) return [{ kind: 'rounded' }]
  const used = quantitiesIn(expression)
  for (const coilPower of [0, 1, 2, 3, 4, -1, -2]) {
    const halves = Math.log2(factor / 0.8 ** (1.5 * coilPower))
    if (Math.abs(halves) > 6.5 || Math.abs(halves - Math.round(halves)) > 2 * agreementTolerance) continue
    const beam = beamSlip(Math.round(halves), used)
    const coil = coilSlip(coilPower, used.has('coilSeparation'))
    return coil ? [coil, ...(beam ? [beam] : [])] : [beam ?? { kind: 'factor' }]
  }
  return [{ kind: 'factor' }]
}

function coilSlip(coilPower: number, usesSeparation: boolean): Slip | null {
  if (coilPower === 0) return null
  if (usesSeparation) return { kind: 'coil-factor-needless' }
  if (coilPower === 2) return { kind: 'coil-factor-forgotten' }
  return { kind: coilPower === 4 ? 'coil-factor-inverted' : 'coil-factor' }
}

function beamSlip(halves: number, used: ReadonlySet<string>): Slip | null {
  if (halves === 0) return null
  if (halves === -2 && !used.has('beamRadius')) return { kind: 'diameter-for-radius' }
  if (halves === 2 && !used.has('beamDiameter')) return { kind: 'radius-for-diameter' }
  return { kind: 'factor' }
}
