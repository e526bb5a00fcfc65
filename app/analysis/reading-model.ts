import type { BudgetInput, Correlation, Distribution } from '#app/metrology/budget.ts'
import { chargeToMass } from '#app/physics/charge-to-mass.ts'
import { edgesOf } from './edge-mean.ts'
import { parallaxFactor } from './parallax.ts'
import {
  type BudgetBench,
  type EvennessTable,
  type Reading,
  type ReadingResult,
  readingBudget,
  tabulateEvenness,
} from './reading.ts'

type Line = ReadingResult['contributions'][string]

/** The quantities of a reading that the lines of its budget add to. */
const QUANTITIES = 9
const VOLTS = 0
const AMPS = 1
const DISTANCE = 2
const BEHIND = 3
const FACTOR = 4
const TURNS = 5
const COIL_RADIUS = 6
const COIL_SEPARATION = 7
const BEAM = 8

const placeByName: Record<string, number> = {
  scaleDistance: BEHIND,
  fieldFactor: FACTOR,
  coilTurns: TURNS,
  coilRadius: COIL_RADIUS,
  coilSeparation: COIL_SEPARATION,
  beamEdge: BEAM,
}
const placeByGroup: Record<string, number> = {
  'anode voltage': VOLTS,
  'coil current': AMPS,
  edges: DISTANCE,
  photo: DISTANCE,
  rung: DISTANCE,
  diameter: DISTANCE,
}

/** Resolutions, accuracies and the beam's edge lie evenly between bounds. */
const evenlyDistributed = [
  'anodeResolution',
  'anodeMeter',
  'coilResolution',
  'coilMeter',
  'rungSetting',
  'leftEdgeResolution',
  'rightEdgeResolution',
  'beamEdge',
]

/** Below this part of the variance the shape of an input does not show. */
const NEGLIGIBLE_SHARE = 0.01

/**
 * One reading as a model and its inputs, the lines of `readingBudget` by the same names, so that it can be
 * propagated by Monte Carlo too. Voltage, current, distance of the scale and field factor have their values; what
 * else stands in the budget is a deviation, of value 0.
 *
 * Inputs with finite degrees of freedom are sampled as t. With two or fewer t has no standard deviation, and Monte
 * Carlo refuses it; where such an input gives less than a hundredth of the variance its shape does not show, and it
 * is sampled as normal. k and g are taken to first order in the geometry of the coils, and beyond the largest
 * orbit g is that of the largest.
 *
 * @throws RangeError as `readingBudget` does; the model throws one where the values belong to no orbit
 */
export function readingProblem(reading: Reading & { bench: BudgetBench; evenness?: EvennessTable }): {
  model: (values: Record<string, number>) => number
  inputs: Record<string, BudgetInput>
} {
  const { lines, natural, at } = equationOf(reading)
  const terms = lines.map(([name, line]) => ({ name, ...termOf(name, line), value: natural(name) }))
  const sums = new Float64Array(QUANTITIES)
  return {
    inputs: Object.fromEntries(
      lines.map(([name, line]) => [name, { ...inputOf(name, line), value: natural(name) }]),
    ),
    model: (values) => {
      sums.fill(0)
      for (const { name, place, sign, value } of terms) {
        sums[place] = (sums[place] as number) + sign * ((values[name] as number) - value)
      }
      return at(sums)
    },
  }
}

/**
 * The mean e/m of the readings of a run as a model and its inputs. What is common to the readings is one input, in
 * units of its standard uncertainty, for that may differ with the reading; what is not is one input a reading, with
 * the reading's number from 1 behind its name. A spread of the edges that is pooled over the run is known equally
 * badly for all its readings: they come from one joint t distribution, which the correlations of 0 say.
 *
 * @param series.readings at least one
 * @throws RangeError naming `readings`, else as `readingBudget` does
 */
export function seriesProblem(series: { bench: BudgetBench; readings: readonly Reading[] }): {
  names: string[]
  inputs: BudgetInput[]
  correlations: Correlation[]
  evaluate: (row: Float64Array) => number
} {
  const { bench, readings } = series
  if (readings.length === 0) throw new RangeError('readings must not be empty')
  const tables = new Map<number, EvennessTable>()
  const names: string[] = []
  const inputs: BudgetInput[] = []
  const spreads: string[] = []
  const equations = readings.map((reading, i) => {
    const sense = reading.currentAmps < 0 ? -1 : 1
    const evenness = tables.get(sense) ?? tabulateEvenness(bench, sense)
    tables.set(sense, evenness)
    const { lines, at } = equationOf({ ...reading, bench, evenness })
    const terms = lines.map(([name, line]) => {
      const own = line.common ? name : `${name} ${i + 1}`
      const input = { ...inputOf(name, line), value: 0, ...(line.common && { standardUncertainty: 1 }) }
      if (!names.includes(own)) {
        names.push(own)
        inputs.push(input)
      }
      if (name === 'edgeSpread' && reading.edgeSpread) spreads.push(own)
      const { place, sign } = termOf(name, line)
      return { row: names.indexOf(own), place, factor: line.common ? sign * line.standardUncertainty : sign }
    })
    return {
      at,
      rows: Int32Array.from(terms, ({ row }) => row),
      places: Int32Array.from(terms, ({ place }) => place),
      factors: Float64Array.from(terms, ({ factor }) => factor),
    }
  })
  const sums = new Float64Array(QUANTITIES)
  return {
    names,
    inputs,
    correlations: spreads.slice(1).map((b, i) => ({ a: spreads[i] as string, b, r: 0 })),
    evaluate: (row) => {
      let total = 0
      for (const { rows, places, factors, at } of equations) {
        sums.fill(0)
        for (let i = 0; i < rows.length; i++) {
          const place = places[i] as number
          sums[place] = (sums[place] as number) + (factors[i] as number) * (row[rows[i] as number] as number)
        }
        total += at(sums)
      }
      return total / equations.length
    },
  }
}

/** e/m of a reading from what its quantities are off by, and the lines of its budget. */
function equationOf(reading: Reading & { bench: BudgetBench; evenness?: EvennessTable }) {
  const { bench, currentAmps } = reading
  const { scale } = bench
  const sense = currentAmps < 0 ? -1 : 1
  const table = reading.evenness ?? tabulateEvenness(bench, sense)
  const budget = readingBudget({ ...reading, evenness: table })
  const { distance } = edgesOf(reading)
  const parallax = parallaxFactor(scale)
  const perMetreBehind = scale.kind === 'ruler-behind' ? -1 / scale.eyeDistanceMetres : 0
  const volts = reading.voltageVolts + (bench.anodeMeter.correctionVolts ?? 0)
  const perCoil = sense * (bench.coilConnection === 'parallel' ? 0.5 : 1)
  const k = bench.fieldFactor?.teslaPerAmp ?? table.teslaPerAmp
  const { perTurn, perRadiusMetre, perSeparationMetre } = table.slopes
  const at = (off: Float64Array): number => {
    const seen = parallax + perMetreBehind * (off[BEHIND] as number)
    const radiusMetres = ((distance + (off[DISTANCE] as number)) * seen) / 2 + (off[BEAM] as number)
    const tabulated = Math.min(Math.max(radiusMetres, 0), table.largestRadiusMetres)
    const coilRadius = off[COIL_RADIUS] as number
    const separation = off[COIL_SEPARATION] as number
    let g = table.g.value(tabulated)
    if (coilRadius !== 0) g += coilRadius * table.gPerRadiusMetre.value(tabulated)
    if (separation !== 0) g += separation * table.gPerSeparationMetre.value(tabulated)
    const factor =
      k +
      (off[FACTOR] as number) +
      perTurn * (off[TURNS] as number) +
      perRadiusMetre * coilRadius +
      perSeparationMetre * separation
    const amps = perCoil * (currentAmps + (off[AMPS] as number))
    return chargeToMass({
      voltageVolts: volts + (off[VOLTS] as number),
      fieldTesla: factor * amps * g,
      radiusMetres,
    })
  }
  const values: Record<string, number> = {
    anodeVoltage: reading.voltageVolts,
    coilCurrent: currentAmps,
    scaleDistance: scale.kind === 'ruler-behind' ? scale.distanceBehindMetres : 0,
    fieldFactor: k,
  }
  return { lines: Object.entries(budget.contributions), natural: (name: string) => values[name] ?? 0, at }
}

function termOf(name: string, { group }: Line): { place: number; sign: 1 | -1 } {
  return {
    place: (placeByName[name] ?? placeByGroup[group]) as number,
    sign: name === 'leftEdgeResolution' ? -1 : 1,
  }
}

function inputOf(name: string, line: Line): Omit<BudgetInput, 'value'> {
  const { standardUncertainty, degreesOfFreedom, common } = line
  return { standardUncertainty, degreesOfFreedom, common, distribution: distributionOf(name, line) }
}

function distributionOf(name: string, { degreesOfFreedom, share }: Line): Distribution {
  if (evenlyDistributed.includes(name)) return 'rectangular'
  if (degreesOfFreedom === Number.POSITIVE_INFINITY) return 'normal'
  return degreesOfFreedom <= 2 && share < NEGLIGIBLE_SHARE ? 'normal' : 't'
}
