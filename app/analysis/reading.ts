import type { Contribution } from '#app/metrology/budget.ts'
import { expandIndependent } from '#app/metrology/coverage.ts'
import { chargeToMass } from '#app/physics/charge-to-mass.ts'
import { speedOfLight } from '#app/physics/constants.ts'
import { requireNotNegative, requirePositive } from '#app/statistics/domain.ts'
import { edgesOf } from './edge-mean.ts'
import type { EvennessTable } from './evenness-table.ts'
import { tabulateEvenness } from './evenness-table.ts'
import { parallaxFactor } from './parallax.ts'
import { requireBench, requireCurrent, requireReading, requireScale } from './reading-domain.ts'
import type { BudgetGroup, Row } from './reading-rows.ts'
import { beamRow, currentRows, edgeRows, pairRows, voltageRows } from './reading-rows.ts'
import type { BudgetBench, Reading } from './reading-types.ts'

export { type EdgeSpread, pooledEdgeSpread } from './edge-spread.ts'
export { type EvennessTable, tabulateEvenness } from './evenness-table.ts'
export { type BudgetGroup, budgetGroups } from './reading-rows.ts'
export type {
  BudgetBench,
  FieldFactor,
  GivenDiameter,
  PhotoDiameter,
  Reading,
  ReadingBench,
  Ruler,
} from './reading-types.ts'

export type ReadingResult = {
  /** e/m in C/kg */
  value: number
  standardUncertainty: number
  expandedUncertainty: number
  coverageFactor: number
  effectiveDegreesOfFreedom: number
  /** part of the uncertainty that all readings of the bench share, and the rest */
  commonUncertainty: number
  independentUncertainty: number
  contributions: Record<
    string,
    Contribution & Pick<Row, 'group' | 'standardUncertainty' | 'degreesOfFreedom' | 'common'>
  >
  groups: { name: BudgetGroup; share: number }[]
  diameterMetres: number
  /** factor that e/m worked out from the centre field was multiplied with: 1/g² */
  evenness: number
  /** mean axial field along the orbit, and current through each coil */
  fieldTesla: number
  currentPerCoilAmps: number
}

const tables = new WeakMap<BudgetBench, Map<1 | -1, EvennessTable>>()

/**
 * e/m of one reading with its uncertainty budget: 2V/(B²r² − V²/c²) with B = k·I·g(r). The sensitivities
 * are the partial derivatives, worked out by hand; evenness takes part in those to the edges, the radius
 * and the separation of the coils.
 *
 * The resolution of each edge and of each meter stands in the budget always, and beside it the spread over
 * people: pooled over the run where `edgeSpread` says so, else of these edges with n − 1 degrees of freedom.
 * Where nobody else has read an edge, nothing is known of the spread and the budget is without it. Who measured off a
 * photo counts as one more reader, with the uncertainties of circle and scale in place of the edges' resolution.
 * With rungs the diameter is known and the current is what is set: how far it can be moved stands in the budget as a
 * line of the coil current.
 * Accuracy of the meters, geometry, parallax and beam are common to all readings of the bench.
 *
 * @param reading.bench is taken not to change: what is tabulated for it is kept with the object
 * @param reading.evenness what `tabulateEvenness` gave for this bench and sense of the current
 * @throws RangeError naming the argument, also for edges that no orbit of the bench can have
 */
export function readingBudget(
  reading: Reading & { bench: BudgetBench; evenness?: EvennessTable },
): ReadingResult {
  const { bench, voltageVolts, currentAmps } = reading
  requireReading(reading)
  requireBench(bench)
  requireScale(bench.scale, reading)
  const edges = edgesOf(reading)
  const parallax = parallaxFactor(bench.scale)
  const diameterMetres = edges.distance * parallax
  if (!(diameterMetres > 0)) throw new RangeError('rightEdges must lie to the right of leftEdges')
  const radius = diameterMetres / 2
  const table = reading.evenness ?? tableOf(bench, currentAmps > 0 ? 1 : -1)
  if (radius > table.largestRadiusMetres) {
    throw new RangeError(
      `rightEdges and leftEdges must belong to an orbit inside the coils, diameter up to ${2 * table.largestRadiusMetres} m, got ${diameterMetres} m`,
    )
  }
  const volts = voltageVolts + (bench.anodeMeter.correctionVolts ?? 0)
  requirePositive('voltageVolts', volts)
  const perCoil = bench.coilConnection === 'parallel' ? 0.5 : 1
  const amps = Math.abs(currentAmps) * perCoil
  const g = table.g.value(radius)
  const k = bench.fieldFactor?.teslaPerAmp ?? table.teslaPerAmp
  const fieldTesla = k * amps * g
  const value = chargeToMass({ voltageVolts: volts, fieldTesla, radiusMetres: radius })

  const lightLimit = volts / speedOfLight.value
  const squares = (fieldTesla * radius) ** 2
  const stretch = squares / (squares - lightLimit ** 2)
  const perVolt = (value / volts) * (2 * stretch - 1)
  const perField = (-2 * value * stretch) / fieldTesla
  const perRadius = (-2 * value * stretch * (1 + (radius * table.g.slope(radius)) / g)) / radius
  const perAmp = perField * k * g * perCoil * Math.sign(currentAmps)
  const rows = [
    ...voltageRows(bench, reading, perVolt),
    ...currentRows(bench, reading, perAmp),
    ...edgeRows(bench.scale, edges, (perRadius * parallax) / 2),
    ...pairRows(bench, table, radius, perField * amps),
    beamRow(bench, perRadius),
  ]
  return summarise(value, rows, {
    diameterMetres,
    evenness: 1 / g ** 2,
    fieldTesla,
    currentPerCoilAmps: amps,
  })
}

/**
 * Whether the orbit has moved since its edges were read: whether the radius predicted from the change of
 * voltage and current, as √V/I, is off by more than the resolution.
 *
 * @throws RangeError naming the argument
 */
export function orbitMoved(change: {
  before: { voltageVolts: number; currentAmps: number }
  now: { voltageVolts: number; currentAmps: number }
  radiusMetres: number
  resolutionMetres: number
}): boolean {
  const { before, now, radiusMetres, resolutionMetres } = change
  for (const [name, { voltageVolts, currentAmps }] of Object.entries({ before, now })) {
    requirePositive(`${name}.voltageVolts`, voltageVolts)
    requireCurrent(`${name}.currentAmps`, currentAmps)
  }
  requirePositive('radiusMetres', radiusMetres)
  requireNotNegative('resolutionMetres', resolutionMetres)
  const ratio = Math.sqrt(now.voltageVolts / before.voltageVolts) * (before.currentAmps / now.currentAmps)
  // A current of the other sense bends the beam to the other side.
  return ratio < 0 || Math.abs(ratio - 1) * radiusMetres > resolutionMetres
}

function tableOf(bench: BudgetBench, sense: 1 | -1): EvennessTable {
  const known = tables.get(bench) ?? new Map<1 | -1, EvennessTable>()
  tables.set(bench, known)
  const table = known.get(sense) ?? tabulateEvenness(bench, sense)
  known.set(sense, table)
  return table
}

type Orbit = Pick<ReadingResult, 'diameterMetres' | 'evenness' | 'fieldTesla' | 'currentPerCoilAmps'>

function summarise(value: number, rows: readonly Row[], orbit: Orbit): ReadingResult {
  const parts = rows.map((row) => Math.abs(row.sensitivity) * row.standardUncertainty)
  const freedom = rows.map((row) => row.degreesOfFreedom)
  const expanded = expandIndependent(parts, freedom)
  const variance = expanded.standardUncertainty ** 2
  const groups: ReadingResult['groups'] = []
  let group: ReadingResult['groups'][number] | null = null
  const contributions: ReadingResult['contributions'] = {}
  let commonVariance = 0
  let independentVariance = 0
  for (let i = 0; i < rows.length; i++) {
    const row = rows[i] as Row
    const contribution = parts[i] as number
    const square = contribution * contribution
    const share = variance > 0 ? square / variance : 0
    contributions[row.name] = {
      standardUncertainty: row.standardUncertainty,
      degreesOfFreedom: row.degreesOfFreedom,
      sensitivity: row.sensitivity,
      contribution,
      share,
      group: row.group,
      common: row.common,
    }
    // The rows of a group follow each other.
    if (group === null || group.name !== row.group) {
      group = { name: row.group, share: 0 }
      groups.push(group)
    }
    group.share += share
    if (row.common) commonVariance += square
    else independentVariance += square
  }
  return {
    value,
    standardUncertainty: expanded.standardUncertainty,
    expandedUncertainty: expanded.expandedUncertainty,
    coverageFactor: expanded.coverageFactor,
    effectiveDegreesOfFreedom: expanded.effectiveDegreesOfFreedom,
    commonUncertainty: Math.sqrt(commonVariance),
    independentUncertainty: Math.sqrt(independentVariance),
    contributions,
    groups,
    diameterMetres: orbit.diameterMetres,
    evenness: orbit.evenness,
    fieldTesla: orbit.fieldTesla,
    currentPerCoilAmps: orbit.currentPerCoilAmps,
  }
}
