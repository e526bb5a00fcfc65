import { effectiveDegreesOfFreedom } from '#app/metrology/coverage.ts'
import {
  standardUncertaintyFromAccuracy,
  standardUncertaintyFromHalfWidth,
  standardUncertaintyFromResolution,
} from '#app/metrology/instrument-accuracy.ts'
import type { CoilPair } from '#app/physics/coil-field.ts'
import type { EdgeMean } from './edge-mean.ts'
import type { EdgeSpread } from './edge-spread.ts'
import type { EvennessTable, Gun } from './evenness-table.ts'

/** What of a commissioned bench a reading needs. x runs along the scale; both lie in the mid-plane. */
export type ReadingBench = {
  readonly coilPair: CoilPair
  /** standard uncertainties, the same error in both coils */
  readonly uTurns?: number
  readonly uRadiusMetres?: number
  readonly uSeparationMetres?: number
  /** series: the measured current goes through each coil; parallel: half of it does */
  readonly coilConnection: 'series' | 'parallel'
  /** measured centre field an ampere through each coil; it takes the place of the geometry in the budget */
  readonly fieldFactor?: { teslaPerAmp: number; standardUncertainty: number }
  readonly gun: Gun
  readonly scale: {
    kind: 'mirror' | 'ruler-behind'
    graduationMetres: number
    /** part of a graduation that is read, 0.5 for half a division */
    readableFraction: number
    distanceBehindMetres: number
    uDistanceBehindMetres: number
    eyeDistanceMetres: number
  }
  /** half-width of the bounds on the radius within which the edge of the glow was taken */
  readonly beam: { halfWidthMetres: number }
  readonly anodeMeter: {
    percentOfReading: number
    digits: number
    digitSizeVolts: number
    /** added to the reading, from a verification */
    correctionVolts?: number
    uCorrectionVolts?: number
  }
  readonly coilMeter: { percentOfReading: number; digits: number; digitSizeAmps: number }
}

/** A diameter off a photo, as it stands on the scale: parallax is not yet taken out. */
export type PhotoDiameter = {
  diameterMetres: number
  uCircleMetres: number
  circleDegreesOfFreedom: number
  /** with the product of both relative uncertainties */
  uScaleMetres: number
  scaleDegreesOfFreedom: number
}

export type Reading = {
  voltageVolts: number
  /** standard error of the window's mean (type A), with its degrees of freedom if known */
  uVoltageVolts: number
  voltageDegreesOfFreedom?: number
  /** as measured, before it divides between coils in parallel; negative when the sense is reversed */
  currentAmps: number
  uCurrentAmps: number
  currentDegreesOfFreedom?: number
  /** one entry a person or repeat, the same of both in the same place */
  leftEdges: readonly number[]
  rightEdges: readonly number[]
  /** of those who measured off a photo and count with it instead of with edges */
  photos?: readonly PhotoDiameter[]
  /** pooled over the run; left out, it is that of these edges alone */
  edgeSpread?: EdgeSpread | null
}

export const budgetGroups = ['anode voltage', 'coil current', 'edges', 'photo', 'coil pair', 'beam'] as const
export type BudgetGroup = (typeof budgetGroups)[number]

/** One line of the budget; `degreesOfFreedom` Infinity for type B. */
export type Row = {
  name: string
  group: BudgetGroup
  sensitivity: number
  standardUncertainty: number
  degreesOfFreedom: number
  common: boolean
}

function typeA(
  group: BudgetGroup,
  name: string,
  sensitivity: number,
  standardUncertainty: number,
  degreesOfFreedom = Number.POSITIVE_INFINITY,
): Row {
  return { name, group, sensitivity, standardUncertainty, degreesOfFreedom, common: false }
}

function common(group: BudgetGroup, name: string, sensitivity: number, standardUncertainty: number): Row {
  return {
    name,
    group,
    sensitivity,
    standardUncertainty,
    degreesOfFreedom: Number.POSITIVE_INFINITY,
    common: true,
  }
}

export function voltageRows(bench: ReadingBench, reading: Reading, sensitivity: number): Row[] {
  const group = 'anode voltage'
  const { percentOfReading, digits, digitSizeVolts: digitSize, uCorrectionVolts = 0 } = bench.anodeMeter
  const accuracy = { reading: reading.voltageVolts, percentOfReading, digits, digitSize }
  const rows = [
    typeA(group, 'anodeVoltage', sensitivity, reading.uVoltageVolts, reading.voltageDegreesOfFreedom),
    typeA(group, 'anodeResolution', sensitivity, standardUncertaintyFromResolution(digitSize)),
    common(group, 'anodeMeter', sensitivity, standardUncertaintyFromAccuracy(accuracy)),
  ]
  if (uCorrectionVolts > 0) rows.push(common(group, 'anodeCorrection', sensitivity, uCorrectionVolts))
  return rows
}

export function currentRows(bench: ReadingBench, reading: Reading, sensitivity: number): Row[] {
  const group = 'coil current'
  const { percentOfReading, digits, digitSizeAmps: digitSize } = bench.coilMeter
  const accuracy = { reading: reading.currentAmps, percentOfReading, digits, digitSize }
  return [
    typeA(group, 'coilCurrent', sensitivity, reading.uCurrentAmps, reading.currentDegreesOfFreedom),
    typeA(group, 'coilResolution', sensitivity, standardUncertaintyFromResolution(digitSize)),
    common(group, 'coilMeter', sensitivity, standardUncertaintyFromAccuracy(accuracy)),
  ]
}

/**
 * `perEdge` is ∂(e/m)/∂ of the right edge as read, the left edge's with the sign turned, and so ∂(e/m)/∂ of the distance.
 *
 * @param distance between the edges as read or measured, the mean of `count` people, of whom `photos` are some
 */
export function edgeRows(
  scale: ReadingBench['scale'],
  { distance, count, spread, photos }: EdgeMean,
  perEdge: number,
): Row[] {
  const readers = count - photos.length
  const group = readers > 0 ? 'edges' : 'photo'
  const rows = photoRows(photos, count, perEdge)
  if (readers > 0) {
    const step = (scale.graduationMetres * scale.readableFraction * readers) / count
    const resolution = standardUncertaintyFromResolution(step)
    rows.push(
      typeA(group, 'leftEdgeResolution', -perEdge, resolution),
      typeA(group, 'rightEdgeResolution', perEdge, resolution),
    )
  }
  if (spread) {
    const standardError = spread.standardDeviationMetres / Math.sqrt(count)
    rows.push(typeA(group, 'edgeSpread', perEdge, standardError, spread.degreesOfFreedom))
  }
  if (scale.kind === 'ruler-behind') {
    // d = (right − left)(L − δ)/L, and perEdge already holds the factor (L − δ)/L.
    const rest = scale.eyeDistanceMetres - scale.distanceBehindMetres
    const perDistance = (-perEdge * distance) / rest
    rows.push(common(group, 'scaleDistance', perDistance, scale.uDistanceBehindMetres))
  }
  return rows
}

/** What circle and scale of the photos bring to the mean of `count` people: each photo's marks are set for themselves. */
function photoRows(photos: readonly PhotoDiameter[], count: number, perEdge: number): Row[] {
  if (photos.length === 0) return []
  const row = (name: string, uncertainties: number[], degreesOfFreedom: number[]) =>
    typeA(
      'photo',
      name,
      perEdge,
      Math.hypot(...uncertainties) / count,
      effectiveDegreesOfFreedom(uncertainties, degreesOfFreedom),
    )
  return [
    row(
      'photoCircle',
      photos.map((photo) => photo.uCircleMetres),
      photos.map((photo) => photo.circleDegreesOfFreedom),
    ),
    row(
      'photoScale',
      photos.map((photo) => photo.uScaleMetres),
      photos.map((photo) => photo.scaleDegreesOfFreedom),
    ),
  ]
}

/** `perFactor` is ∂(e/m)/∂(k·g): k and g enter only as their product. */
export function pairRows(
  bench: ReadingBench,
  table: EvennessTable,
  radius: number,
  perFactor: number,
): Row[] {
  const group = 'coil pair'
  const g = table.g.value(radius)
  if (bench.fieldFactor) {
    return [common(group, 'fieldFactor', perFactor * g, bench.fieldFactor.standardUncertainty)]
  }
  const { slopes, teslaPerAmp: k } = table
  const perRadius = slopes.perRadiusMetre * g + k * table.gPerRadiusMetre.value(radius)
  const perSeparation = slopes.perSeparationMetre * g + k * table.gPerSeparationMetre.value(radius)
  return [
    common(group, 'coilTurns', perFactor * slopes.perTurn * g, bench.uTurns ?? 0),
    common(group, 'coilRadius', perFactor * perRadius, bench.uRadiusMetres ?? 0),
    common(group, 'coilSeparation', perFactor * perSeparation, bench.uSeparationMetres ?? 0),
  ]
}

export function beamRow(bench: ReadingBench, perRadius: number): Row {
  return common('beam', 'beamEdge', perRadius, standardUncertaintyFromHalfWidth(bench.beam.halfWidthMetres))
}
