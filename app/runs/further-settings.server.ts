import type { Diagnosis } from '../analysis/diagnosis.ts'
import { chooseSettings, type Prediction, predictGrid } from '../analysis/planning.ts'
import type { SeriesField } from '../analysis/series-model.ts'
import type { CommissionedBench } from '../protocol/bench-config.ts'
import type { Entry } from './analysis.server.ts'
import type { FurtherSetting } from './analysis-view.ts'

const count = 3
const voltSteps = 6
const ampSteps = 7
/** Common practice: below it the beam of most tubes is too faint to read. */
export const leastAnodeVolts = 100
const clearanceMetres = 0.003

/** The settings of a bench that its planner walks over, from a faint beam and a large orbit up to its limits. */
export function settingGrid({ limits, reversal }: CommissionedBench): {
  volts: number[]
  amps: number[]
  polarities: (1 | -1)[]
} {
  const steps = (low: number, high: number, many: number, step: number) =>
    Array.from({ length: many }, (_, i) => Math.floor((low + ((high - low) * i) / (many - 1)) / step) * step)
  return {
    volts: steps(leastAnodeVolts, limits.anodeVolts, voltSteps, 10),
    amps: steps(0.3 * limits.coilAmps, limits.coilAmps, ampSteps, 0.05).map((amps) =>
      Number(amps.toFixed(2)),
    ),
    polarities: reversal === 'not' ? [1] : [1, -1],
  }
}

/** Where the beam of a bench has to stay. */
export const planLimits = ({ limits, tube, gun }: CommissionedBench) => ({
  anodeVolts: limits.anodeVolts,
  coilAmps: limits.coilAmps,
  leastAnodeVolts,
  bulbRadiusMetres: tube.bulbRadiusMetres,
  gun,
  clearanceMetres,
})

/** The few settings that would tell most of what the readings leave open, radii being predicted with the run's own e/m. */
export function furtherSettings({
  entries,
  field,
  config,
  diagnosis,
}: {
  entries: readonly Entry[]
  field: SeriesField
  config: CommissionedBench
  diagnosis: Diagnosis
}): FurtherSetting[] {
  const taken = entries.map(({ point }) => point)
  const mean = (of: (point: (typeof taken)[number]) => number) =>
    taken.reduce((sum, point) => sum + of(point), 0) / taken.length
  const bench = {
    field,
    limits: planLimits(config),
    chargeToMass: diagnosis.general.chargeToMass,
    uChargeToMass: diagnosis.general.standardUncertainty,
    uncertainties: {
      uVoltage: mean(({ uVoltage }) => uVoltage),
      uCurrent: mean(({ uCurrent }) => uCurrent),
      uDiameter: mean(({ uDiameter }) => uDiameter),
    },
  }
  try {
    let candidates = predictGrid(bench, settingGrid(config))
    const known = [...taken]
    return Array.from({ length: count }, () => {
      const [best] = chooseSettings(bench, { candidates, count: 1, criterion: 'all', taken: known }) as [
        Prediction,
      ]
      const { anodeVolts, coilAmps, polarity, radiusMetres } = best
      // The same setting again would tell less than another of its kind, and teach less.
      candidates = candidates.filter((candidate) => candidate !== best)
      known.push({
        voltageVolts: anodeVolts,
        currentAmps: coilAmps,
        diameterMetres: 2 * radiusMetres,
        polarity,
        ...bench.uncertainties,
      })
      return {
        anodeVolts,
        coilAmps,
        polarity,
        why: `an orbit of about ${Math.round(radiusMetres * 200)} cm across`,
      }
    })
  } catch (error) {
    if (error instanceof RangeError) return []
    throw error
  }
}
