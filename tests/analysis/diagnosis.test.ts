import { describe, expect, it } from 'vitest'
import { diagnose } from '#app/analysis/diagnosis.ts'
import type { Effect } from '#app/analysis/series-model.ts'
import { expectNear } from '#tests/support/near.ts'
import { classField, classSeries, gaussian, settingsOf, simulate, simulatedField } from './series-data.ts'

const none = { strayFieldTesla: 0, voltageOffsetVolts: 0, scaleOffsetMetres: 0 }
const known: [Effect, number][] = [
  ['strayFieldTesla', 50e-6],
  ['voltageOffsetVolts', 2.5],
  ['scaleOffsetMetres', 1.5e-3],
]

/** Findings of 200 seeded runs of 24 readings. */
function findings(truth: typeof none, { isReversed, uDiameter }: { isReversed: boolean; uDiameter: number }) {
  const noise = gaussian(77)
  const settings = settingsOf(24, [80, 140, 200, 300], [0.9, 1.4, 2], isReversed)
  return Array.from({ length: 200 }, () => {
    const readings = simulate({ truth, settings, uVoltage: 0.1, uCurrent: 0.001, uDiameter }, noise)
    return diagnose({ readings, field: simulatedField }).finding
  })
}

describe('The diagnosis', () => {
  it.each(known)(
    'names %s of %s, and its size within its error, in nine of ten runs that can tell it',
    (effect, size) => {
      for (const isReversed of [true, false]) {
        const found = findings({ ...none, [effect]: size }, { isReversed, uDiameter: 0.1e-3 })
        const right = found.filter((finding) => {
          if (finding.kind !== 'effect' || finding.subset.effects.join() !== effect) return false
          const { value, standardUncertainty } = finding.subset.sizes[effect] ?? {
            value: 0,
            standardUncertainty: 0,
          }
          return Math.abs(value - size) <= 2 * standardUncertainty
        })
        expect(right.length / found.length).toBeGreaterThanOrEqual(0.9)
      }
    },
  )

  it.each(known.slice(1))(
    'says of %s of %s that it cannot be told where it cannot, and hardly ever names another',
    (effect, size) => {
      const found = findings({ ...none, [effect]: size }, { isReversed: false, uDiameter: 0.3e-3 })
      const kinds = found.map((finding) => {
        if (finding.kind === 'ambiguous')
          return finding.subsets.some(({ effects }) => effects.join() === effect) ? 'open' : 'wrong'
        if (finding.kind === 'effect') return finding.subset.effects.join() === effect ? 'right' : 'wrong'
        return finding.kind
      })
      const part = (kind: string) => kinds.filter((it) => it === kind).length / kinds.length
      expect(part('open')).toBeGreaterThan(0.2)
      expect(part('wrong')).toBeLessThan(0.03)
      expect(part('right') + part('open')).toBeGreaterThan(0.93)
    },
  )

  it('finds that readings without any effect agree', () => {
    const kinds = findings(none, { isReversed: true, uDiameter: 0.3e-3 }).map(({ kind }) => kind)
    expect(kinds.filter((kind) => kind === 'agreement').length).toBeGreaterThanOrEqual(185)
  })

  it('states no value of the class readings, which nothing that occurs explains, and says what each effect would have to be', () => {
    const { finding, stated, subsets } = diagnose({ readings: classSeries, field: classField })
    expect(stated).toBeNull()
    const [plain] = subsets
    expect(plain?.effects).toEqual([])
    expectNear(plain?.chiSquared ?? 0, 106, { abs: 0.5 })
    expect(plain?.degreesOfFreedom).toBe(23)
    if (finding.kind !== 'unexplained') throw new Error(`found ${finding.kind}`)
    const sizes = Object.fromEntries(finding.wouldNeed.map(({ effect, size }) => [effect, size.value]))
    expectNear(sizes.voltageOffsetVolts ?? 0, 73, { abs: 0.5 })
    expectNear(sizes.scaleOffsetMetres ?? 0, -48e-3, { abs: 0.5e-3 })
    expectNear(sizes.strayFieldTesla ?? 0, -240e-6, { abs: 1e-6 })
  })

  it('flags a reading that lies far off and keeps it in the fit', () => {
    const noise = gaussian(5)
    const settings = settingsOf(12, [150, 200, 250, 300], [1.2, 1.5, 1.8], false)
    const readings = simulate(
      { truth: none, settings, uVoltage: 0.3, uCurrent: 0.003, uDiameter: 0.5e-3 },
      noise,
    )
    const wrong = readings.map((reading, i) =>
      i === 4 ? { ...reading, diameterMetres: reading.diameterMetres + 4e-3 } : reading,
    )
    const { outliers, general } = diagnose({ readings: wrong, field: simulatedField })
    expect(outliers.map(({ index }) => index)).toEqual([4])
    expect(general.residuals).toHaveLength(12)
  })

  it('of one reading states its value with what all readings share, and finds nothing', () => {
    const { finding, stated } = diagnose({
      readings: classSeries.slice(0, 1),
      field: classField,
      commonRelative: 0.01,
    })
    expect(finding.kind).toBe('too-few')
    expectNear(stated?.commonUncertainty ?? 0, 0.01 * (stated?.chargeToMass ?? 0), { rel: 1e-12 })
  })

  it('of equal settings states a value too', () => {
    const noise = gaussian(3)
    const settings = settingsOf(6, [200], [1.5], false)
    const readings = simulate(
      { truth: none, settings, uVoltage: 0.3, uCurrent: 0.003, uDiameter: 0.5e-3 },
      noise,
    )
    const { finding, stated } = diagnose({ readings, field: simulatedField })
    expect(finding.kind).toBe('agreement')
    expect(stated?.standardUncertainty).toBeGreaterThan(0)
  })

  it('is refused without readings', () => {
    expect(() => diagnose({ readings: [], field: classField })).toThrow(/^readings must not be empty/)
  })
})
