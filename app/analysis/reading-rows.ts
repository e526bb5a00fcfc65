import { effectiveDegreesOfFreedom } from '#app/metrology/coverage.ts'
import {
  standardUncertaintyFromAccuracy,
  standardUncertaintyFromHalfWidth,
  standardUncertaintyFromResolution,
} from '#app/metrology/instrument-accuracy.ts'
import type { EdgeMean } from './edge-mean.ts'
import type { EvennessTable } from './evenness-table.ts'
import type { BudgetBench, FieldFactor, GivenDiameter, PhotoDiameter, Reading } from './reading-types.ts'

export const budgetGroups = [
  'anode voltage',
  'coil current',
  'edges',
  'photo',
  'rung',
  'diameter',
  'coil pair',
  'beam',
] as const
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

export function voltageRows(bench: BudgetBench, reading: Reading, sensitivity: number): Row[] {
  const group = 'anode voltage'
  const { percentOfReading, digits, digitSizeVolts: digitSize, uCorrectionVolts = 0 } = bench.anodeMeter
  const accuracy = { reading: reading.voltageVolts, percentOfReading, digits, digitSize }
  const rows = [
    typeA(group, 'anodeVoltage', sensitivity, reading.uVoltageVolts, reading.voltageDegreesOfFreedom),
    typeA(
      group,
      'anodeResolution',
      sensitivity,
      standardUncertaintyFromResolution(reading.voltageDigitVolts ?? digitSize),
    ),
    common(group, 'anodeMeter', sensitivity, standardUncertaintyFromAccuracy(accuracy)),
  ]
  if (uCorrectionVolts > 0) rows.push(common(group, 'anodeCorrection', sensitivity, uCorrectionVolts))
  return rows
}

export function currentRows(bench: BudgetBench, reading: Reading, sensitivity: number): Row[] {
  const group = 'coil current'
  const { percentOfReading, digits, digitSizeAmps: digitSize } = bench.coilMeter
  const accuracy = { reading: reading.currentAmps, percentOfReading, digits, digitSize }
  const rows = [
    typeA(group, 'coilCurrent', sensitivity, reading.uCurrentAmps, reading.currentDegreesOfFreedom),
    typeA(
      group,
      'coilResolution',
      sensitivity,
      standardUncertaintyFromResolution(reading.currentDigitAmps ?? digitSize),
    ),
    common(group, 'coilMeter', sensitivity, standardUncertaintyFromAccuracy(accuracy)),
  ]
  if (reading.given?.source === 'rung') {
    const setting = standardUncertaintyFromHalfWidth(reading.given.settingHalfWidthAmps)
    rows.push(typeA(group, 'rungSetting', sensitivity, setting))
  }
  return rows
}

/**
 * `perEdge` is ∂(e/m)/∂ of the right edge as read, the left edge's with the sign turned, and so ∂(e/m)/∂ of the distance.
 *
 * @param distance between the edges as read or measured, the mean of `count` people, of whom `photos` are some
 */
export function edgeRows(
  scale: BudgetBench['scale'],
  { distance, count, spread, photos, given }: EdgeMean,
  perEdge: number,
): Row[] {
  if (given) return givenRows(scale, given, perEdge)
  const readers = count - photos.length
  const group = readers > 0 ? 'edges' : 'photo'
  const rows: Row[] = []
  if (readers > 0 && scale.kind !== 'rungs') {
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
  return [...rows, ...parallaxRows(scale, group, distance, perEdge), ...photoRows(photos, count, perEdge)]
}

function givenRows(scale: BudgetBench['scale'], given: GivenDiameter, perEdge: number): Row[] {
  const { source, diameterMetres, uDiameterMetres } = given
  if (source === 'rung') return [common('rung', 'rungDistance', perEdge, uDiameterMetres)]
  return [
    typeA('diameter', 'statedDiameter', perEdge, uDiameterMetres),
    ...parallaxRows(scale, 'diameter', diameterMetres, perEdge),
  ]
}

function parallaxRows(
  scale: BudgetBench['scale'],
  group: BudgetGroup,
  distance: number,
  perEdge: number,
): Row[] {
  if (scale.kind !== 'ruler-behind') return []
  // d = (right − left)(L − δ)/L, and perEdge already holds the factor (L − δ)/L.
  const perDistance = (-perEdge * distance) / (scale.eyeDistanceMetres - scale.distanceBehindMetres)
  return [common(group, 'scaleDistance', perDistance, scale.uDistanceBehindMetres)]
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
export function pairRows(bench: BudgetBench, table: EvennessTable, radius: number, perFactor: number): Row[] {
  const group = 'coil pair'
  const g = table.g.value(radius)
  if (bench.coilPair === null || bench.fieldFactor) {
    const { standardUncertainty } = bench.fieldFactor as FieldFactor
    return [common(group, 'fieldFactor', perFactor * g, standardUncertainty)]
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

export function beamRow(bench: BudgetBench, perRadius: number): Row {
  return common('beam', 'beamEdge', perRadius, standardUncertaintyFromHalfWidth(bench.beam.halfWidthMetres))
}
