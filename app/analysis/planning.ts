import { orbitRadiusMetres } from '#app/physics/charge-to-mass.ts'
import { centreFieldTesla } from '#app/physics/coil-field.ts'
import { requirePositive } from '#app/statistics/domain.ts'
import {
  defaultPriors,
  type Effect,
  effects,
  informationRows,
  informationUnits,
  type Priors,
  type SeriesField,
  type SeriesPoint,
  type SeriesReading,
  seriesPoints,
} from './series-model.ts'

export type Setting = { anodeVolts: number; coilAmps: number; polarity: 1 | -1 }

/** The largest values that a bench may be set to, and where its beam has to stay. */
export type PlanLimits = {
  anodeVolts: number
  coilAmps: number
  /** below it the beam is too faint to read */
  leastAnodeVolts: number
  bulbRadiusMetres: number
  /** the gun in the bulb's frame, whose centre is on the coil axis; direction of any length */
  gun: { xMetres: number; yMetres: number; direction: { x: number; y: number } }
  /** how near the glass the beam may come */
  clearanceMetres: number
}

export type Prediction = Setting & {
  radiusMetres: number
  /** standard uncertainty of the radius by that of e/m */
  uRadiusMetres: number
  /** what e/m from the centre field has to be multiplied with */
  evenness: number
  /** standard uncertainty of e/m from this one reading by its own parts, relative */
  relativeUncertainty: number
  /** why it cannot be set or read, or null */
  refused: 'limit' | 'glass' | 'faint' | null
}

/** What a reading at this setting would be uncertain by. */
export type ReadingUncertainties = { uVoltage: number; uCurrent: number; uDiameter: number }

type PlanBench = {
  field: SeriesField
  limits: PlanLimits
  /** e/m that radii are predicted with: the run's own, or what staff know */
  chargeToMass: number
  uChargeToMass: number
  uncertainties: ReadingUncertainties
}

/**
 * What a setting would give: its orbit, whether it can be set and read, and how well one reading there would know e/m.
 *
 * @throws RangeError naming `chargeToMass` or the setting
 */
export function predictSetting(bench: PlanBench, setting: Setting): Prediction {
  const { field, limits, chargeToMass, uChargeToMass, uncertainties } = bench
  requirePositive('chargeToMass', chargeToMass)
  requirePositive('setting.anodeVolts', setting.anodeVolts)
  requirePositive('setting.coilAmps', setting.coilAmps)
  const radiusMetres = radiusOf(bench, setting)
  const reading = readingAt(setting, radiusMetres, uncertainties)
  const [point] = seriesPoints([reading], field) as [SeriesPoint]
  const own = Math.hypot(
    uncertainties.uVoltage / setting.anodeVolts,
    (2 * uncertainties.uCurrent) / setting.coilAmps,
    uncertainties.uDiameter / radiusMetres,
  )
  const centre = 'pair' in field ? centreFieldTesla(field.pair, 1) : field.teslaPerAmp
  return {
    ...setting,
    radiusMetres,
    uRadiusMetres: (radiusMetres * uChargeToMass) / (2 * chargeToMass),
    evenness: (centre / point.teslaPerAmp) ** 2,
    relativeUncertainty: own,
    refused: refusalOf(setting, radiusMetres, limits),
  }
}

/** The orbit in the uneven field: the field that it sees depends on its radius, found by repetition. */
function radiusOf({ field, chargeToMass }: PlanBench, setting: Setting): number {
  let radius = 0.03
  for (let i = 0; i < 40; i++) {
    const [point] = seriesPoints(
      [readingAt(setting, radius, { uVoltage: 1, uCurrent: 1, uDiameter: 1 })],
      field,
    ) as [SeriesPoint]
    const next = orbitRadiusMetres({
      voltageVolts: setting.anodeVolts,
      fieldTesla: point.tesla,
      chargeToMass,
    })
    if (Math.abs(next - radius) < 1e-9) return next
    radius = next
  }
  return radius
}

const readingAt = (
  { anodeVolts, coilAmps, polarity }: Setting,
  radiusMetres: number,
  uncertainties: ReadingUncertainties,
): SeriesReading => ({
  voltageVolts: anodeVolts,
  currentAmps: coilAmps,
  diameterMetres: 2 * radiusMetres,
  polarity,
  ...uncertainties,
})

function refusalOf(
  { anodeVolts, coilAmps, polarity }: Setting,
  radius: number,
  limits: PlanLimits,
): Prediction['refused'] {
  if (anodeVolts > limits.anodeVolts || coilAmps > limits.coilAmps) return 'limit'
  if (anodeVolts < limits.leastAnodeVolts) return 'faint'
  const { gun } = limits
  const length = Math.hypot(gun.direction.x, gun.direction.y)
  // An electron in a field towards +z circles counter-clockwise, seen from there: its centre lies to the left.
  const centreX = gun.xMetres - (polarity * radius * gun.direction.y) / length
  const centreY = gun.yMetres + (polarity * radius * gun.direction.x) / length
  const reach = Math.hypot(centreX, centreY) + radius
  return reach > limits.bulbRadiusMetres - limits.clearanceMetres ? 'glass' : null
}

/** A grid of settings a bench can take, with what each would give. */
export function predictGrid(
  bench: PlanBench,
  {
    volts,
    amps,
    polarities,
  }: { volts: readonly number[]; amps: readonly number[]; polarities: readonly (1 | -1)[] },
): Prediction[] {
  return volts.flatMap((anodeVolts) =>
    amps.flatMap((coilAmps) =>
      polarities.map((polarity) => predictSetting(bench, { anodeVolts, coilAmps, polarity })),
    ),
  )
}

export type PlanOutlook = {
  /** standard uncertainty of e/m from the series, by the readings' own parts and the priors, relative */
  relativeUncertainty: number
  /** standard uncertainty of each effect with the readings and its prior */
  effects: Record<Effect, number>
  /** part of each effect's prior variance that the readings take away: near 0 they say nothing of it */
  told: Record<Effect, number>
}

/** What a series at these settings would know of e/m and the effects. */
export function outlookOf(
  bench: PlanBench,
  settings: readonly Setting[],
  { taken = [], priors = defaultPriors }: { taken?: readonly SeriesReading[]; priors?: Priors } = {},
): PlanOutlook {
  const information = informationOf(bench, settings, taken, priors)
  const variances = effects.map((_, i) => varianceAlong(information, 1 + i))
  const size = (i: number) => Math.sqrt(variances[i] as number) * (informationUnits[1 + i] as number)
  const prior = (effect: Effect) => priors[effect].standardUncertainty
  return {
    relativeUncertainty:
      (Math.sqrt(varianceAlong(information, 0)) * (informationUnits[0] as number)) / bench.chargeToMass,
    effects: Object.fromEntries(effects.map((effect, i) => [effect, size(i)])) as Record<Effect, number>,
    told: Object.fromEntries(
      effects.map((effect, i) => [effect, 1 - (size(i) / prior(effect)) ** 2]),
    ) as Record<Effect, number>,
  }
}

/**
 * Chooses settings by exchange: each is replaced by the candidate that improves the series most, until none does. `all`
 * takes the largest determinant of the information of e/m and all effects (D-optimal), `charge-to-mass` the smallest
 * variance of e/m (c-optimal).
 *
 * @param choice.candidates of which those that are refused are passed over; one may be chosen more than once
 * @param choice.taken readings that are there already
 * @returns as many as `count`, in the order of the candidates
 * @throws RangeError naming `candidates` where none can be set, or `count`
 *
 * Source: V. V. Fedorov, Theory of Optimal Experiments (1972), chapter 3.
 */
export function chooseSettings(
  bench: PlanBench,
  choice: {
    candidates: readonly Prediction[]
    count: number
    criterion: 'all' | 'charge-to-mass'
    taken?: readonly SeriesReading[]
    priors?: Priors
  },
): Prediction[] {
  const { count, criterion, taken = [], priors = defaultPriors } = choice
  const candidates = choice.candidates.filter(({ refused }) => refused === null)
  if (candidates.length === 0) throw new RangeError('candidates must hold a setting that can be set and read')
  if (!(Number.isInteger(count) && count >= 1 && count <= 100))
    throw new RangeError(`count must be a whole number from 1 to 100, got ${count}`)
  const rows = rowsOf(bench, candidates)
  const base = informationOf(bench, [], taken, priors)
  const worth = (information: number[][]) =>
    criterion === 'all' ? logDeterminant(information) : -Math.log(varianceAlong(information, 0))
  const chosen: number[] = []
  let information = base
  const bestFor = (from: number[][]) => {
    let best = 0
    let most = Number.NEGATIVE_INFINITY
    rows.forEach((row, index) => {
      const value = worth(plus(from, row, 1))
      if (value > most + 1e-12) {
        most = value
        best = index
      }
    })
    return { best, most }
  }
  for (let i = 0; i < count; i++) {
    const { best } = bestFor(information)
    chosen.push(best)
    information = plus(information, rows[best] as number[], 1)
  }
  for (let round = 0, isBetter = true; isBetter && round < 20; round++) {
    isBetter = false
    for (let i = 0; i < chosen.length; i++) {
      const without = plus(information, rows[chosen[i] as number] as number[], -1)
      const { best, most } = bestFor(without)
      if (most <= worth(information) + 1e-9) continue
      chosen[i] = best
      information = plus(without, rows[best] as number[], 1)
      isBetter = true
    }
  }
  return chosen.sort((a, b) => a - b).map((index) => candidates[index] as Prediction)
}

function rowsOf(bench: PlanBench, settings: readonly Setting[]): number[][] {
  const readings = settings.map((setting) =>
    readingAt(setting, radiusOf(bench, setting), bench.uncertainties),
  )
  return informationRows(seriesPoints(readings, bench.field), bench.chargeToMass)
}

/** Information of the readings at the settings, of those taken already, and of the priors. */
function informationOf(
  bench: PlanBench,
  settings: readonly Setting[],
  taken: readonly SeriesReading[],
  priors: Priors,
): number[][] {
  const size = 1 + effects.length
  let information = Array.from({ length: size }, () => new Array<number>(size).fill(0))
  effects.forEach((effect, i) => {
    const row = new Array<number>(size).fill(0)
    row[1 + i] = (informationUnits[1 + i] as number) / priors[effect].standardUncertainty
    information = plus(information, row, 1)
  })
  const rows = [
    ...rowsOf(bench, settings),
    ...informationRows(seriesPoints(taken, bench.field), bench.chargeToMass),
  ]
  for (const row of rows) information = plus(information, row, 1)
  // Something has to be known of e/m before the first reading: hardly anything.
  const head = information[0] as number[]
  head[0] = (head[0] as number) + 1e-6
  return information
}

const plus = (information: readonly number[][], row: readonly number[], sign: 1 | -1): number[][] =>
  information.map((line, i) => line.map((value, j) => value + sign * (row[i] as number) * (row[j] as number)))

/** Lower triangle L of LLᵀ; null where the matrix has none. */
function cholesky(matrix: readonly number[][]): number[][] | null {
  const size = matrix.length
  const lower = Array.from({ length: size }, () => new Array<number>(size).fill(0))
  for (let i = 0; i < size; i++)
    for (let j = 0; j <= i; j++) {
      let sum = matrix[i]?.[j] as number
      for (let k = 0; k < j; k++) sum -= (lower[i]?.[k] as number) * (lower[j]?.[k] as number)
      if (i === j && !(sum > 0)) return null
      ;(lower[i] as number[])[j] = i === j ? Math.sqrt(sum) : sum / (lower[j]?.[j] as number)
    }
  return lower
}

function logDeterminant(matrix: readonly number[][]): number {
  const lower = cholesky(matrix)
  if (!lower) return Number.NEGATIVE_INFINITY
  return lower.reduce((total, row, i) => total + 2 * Math.log(row[i] as number), 0)
}

/** The entry of the inverse at a place of the diagonal. */
function varianceAlong(matrix: readonly number[][], place: number): number {
  const lower = cholesky(matrix)
  if (!lower) return Number.POSITIVE_INFINITY
  const solved: number[] = []
  for (let i = 0; i < matrix.length; i++) {
    let sum = i === place ? 1 : 0
    for (let k = 0; k < i; k++) sum -= (lower[i]?.[k] as number) * (solved[k] as number)
    solved.push(sum / (lower[i]?.[i] as number))
  }
  return solved.reduce((total, value) => total + value * value, 0)
}
