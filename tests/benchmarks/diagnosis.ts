import { diagnose } from '#app/analysis/diagnosis.ts'
import { gaussian, settingsOf, simulate, simulatedField } from '#tests/analysis/series-data.ts'
import { type Figure, measure } from './measure.ts'

const COUNT = 40

/** Readings with every effect in them, other ones for each of some calls. */
function seriesOf(seed: number) {
  return simulate(
    {
      truth: { strayFieldTesla: 25e-6, voltageOffsetVolts: 1, scaleOffsetMetres: 4e-4 },
      settings: settingsOf(COUNT, [150, 200, 250, 300], [1.2, 1.5, 1.8, 2.1, 2.4], true),
      uVoltage: 0.3,
      uCurrent: 0.003,
      uDiameter: 4e-4,
    },
    gaussian(seed),
  )
}

export function diagnosisFigures(): Figure[] {
  const many = Array.from({ length: 20 }, (_, i) => seriesOf(i + 1))
  const work = (call: number) => {
    const { subsets, general } = diagnose({
      readings: many[call % many.length] as (typeof many)[number],
      field: simulatedField,
    })
    // None of them, each, each two, and all three.
    if (subsets.length !== 8) throw new Error(`diagnosis fitted ${subsets.length} combinations`)
    return subsets.reduce((sum, { chiSquared }) => sum + chiSquared, general.chiSquared)
  }
  const [seconds] = measure(work) as [number]
  return [{ name: `diagnosis of ${COUNT} readings over all subsets`, seconds, goalSeconds: 50e-3 }]
}
