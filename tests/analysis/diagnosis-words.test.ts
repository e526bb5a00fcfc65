import { describe, expect, it } from 'vitest'
import { diagnose } from '#app/analysis/diagnosis.ts'
import { diagnosisWords } from '#app/analysis/diagnosis-words.ts'
import { classField, classSeries, gaussian, settingsOf, simulate, simulatedField } from './series-data.ts'

const none = { strayFieldTesla: 0, voltageOffsetVolts: 0, scaleOffsetMetres: 0 }
const wordsOf = (truth: typeof none, isReversed: boolean) => {
  const settings = settingsOf(24, [80, 140, 200, 300], [0.9, 1.4, 2], isReversed)
  const readings = simulate(
    { truth, settings, uVoltage: 0.1, uCurrent: 0.001, uDiameter: 0.2e-3 },
    gaussian(12),
  )
  return diagnosisWords(
    diagnose({ readings, field: simulatedField }),
    readings.map((_, i) => i + 1),
  )
}

describe('The diagnosis in words', () => {
  it('of the class readings says that no line fits, what each effect would have to be, and what to check, and states no value', () => {
    const { finding, checks } = diagnosisWords(diagnose({ readings: classSeries, field: classField }), [])
    const said = finding.join(' ')
    expect(said).toContain('No single line fits the readings: χ² is 106 on 23.')
    expect(said).toContain('far too large')
    expect(said).toMatch(/stray field along the coil axis −240 ± 47 µT/)
    expect(said).toMatch(/offset of the anode voltage 73\.3 ± 4\.9 V/)
    expect(said).toMatch(/offset of the scale −48\.4 ± 6\.3 mm/)
    expect(said).toContain('no corrected value is stated')
    expect(checks.length).toBeGreaterThan(3)
  })

  it('names an effect with its size and whether it occurs, and gives no check list then', () => {
    const { finding, checks, unseen } = wordsOf({ ...none, strayFieldTesla: 50e-6 }, true)
    expect(finding[0]).toMatch(
      /They do with one effect: stray field along the coil axis [45]\d(\.\d+)? ± \d(\.\d+)? µT/,
    )
    expect(finding[1]).toContain('25 to 65 µT')
    expect(checks).toEqual([])
    expect(unseen.join(' ')).toMatch(/percentage.*tilt.*lose to the gas/s)
  })

  it('never holds the value that e/m ought to have', () => {
    for (const isReversed of [true, false])
      expect(JSON.stringify(wordsOf(none, isReversed))).not.toMatch(/1\.75|1\.76|accepted/)
  })
})
