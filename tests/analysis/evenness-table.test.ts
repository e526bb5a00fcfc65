import { describe, expect, it } from 'vitest'
import type { Reading, ReadingBench } from '#app/analysis/reading.ts'
import { readingBudget, tabulateEvenness } from '#app/analysis/reading.ts'
import { acceptedChargeToMass } from '#app/physics/accepted-value.ts'
import { evennessFactor } from '#app/physics/orbit.ts'
import { expectNear } from '#tests/support/near.ts'
import { axisGun, bottomGun, sideGun } from './benches.ts'
import { orbitEdges } from './orbit-edges.ts'

const accepted = acceptedChargeToMass.value

/** What instruments and a reader without error would give for an orbit of the bench. */
function perfectReading(bench: ReadingBench, voltageVolts: number, amps: number, constant: number): Reading {
  const currentPerCoilAmps = bench.coilConnection === 'parallel' ? amps / 2 : amps
  const { left, right } = orbitEdges({ bench, voltageVolts, currentPerCoilAmps, chargeToMass: constant })
  const { kind, eyeDistanceMetres: eye, distanceBehindMetres: behind } = bench.scale
  const seen = kind === 'mirror' ? 1 : eye / (eye - behind)
  return {
    voltageVolts,
    uVoltageVolts: 0.02,
    currentAmps: amps,
    uCurrentAmps: 0.0003,
    leftEdges: [left * seen],
    rightEdges: [right * seen],
  }
}

describe('closure: the constant that made the orbit comes back from its edges', () => {
  const cases: [string, ReadingBench, number, number][] = [
    ['side gun', sideGun, 200, 1.5],
    ['side gun, small orbit', sideGun, 120, 2.4],
    ['side gun, wide orbit', sideGun, 300, 1.05],
    ['bottom gun', bottomGun, 250, 1.3],
    ['bottom gun, wide orbit', bottomGun, 300, 1],
    [
      'bottom gun, reversed on the other side',
      { ...bottomGun, gun: { ...bottomGun.gun, yMetres: 0.055 } },
      250,
      -1.3,
    ],
    [
      'gun askew',
      { ...sideGun, gun: { xMetres: 0.02, yMetres: -0.03, direction: { x: 1, y: 0.7 } } },
      220,
      1.4,
    ],
    ['axis gun', axisGun, 200, 4],
    ['axis gun, reversed', axisGun, 200, -4],
  ]
  it.each(cases)('%s', (_name, bench, volts, amps) => {
    for (const constant of [accepted, 1.4e11, 2.3e11]) {
      // The same orbit in shape for each constant.
      const current = amps * Math.sqrt(accepted / constant)
      const reading = perfectReading(bench, volts, current, constant)
      const { value, evenness } = readingBudget({ ...reading, bench })
      expectNear(value, constant, { rel: 2e-6 })
      expect(evenness).toBeGreaterThan(1.0005)
    }
  })

  it('where the centre field alone would be off by percents', () => {
    const reading = perfectReading(bottomGun, 300, 1, accepted)
    const { value, evenness } = readingBudget({ ...reading, bench: bottomGun })
    expect(value / evenness / accepted).toBeLessThan(0.97)
  })

  it('and the diameter is that on the beam, not on the scale behind it', () => {
    const reading = perfectReading(bottomGun, 250, 1.3, accepted)
    const scale = (reading.rightEdges[0] as number) - (reading.leftEdges[0] as number)
    // Closed form: (L − δ)/L with L = 0.6 m, δ = 0.08 m.
    expectNear(readingBudget({ ...reading, bench: bottomGun }).diameterMetres, (scale * 0.52) / 0.6, {
      rel: 1e-14,
    })
  })
})

describe('the evenness of a bench', () => {
  it('is that of conserved angular momentum where the diameter lies through the axis', () => {
    const table = tabulateEvenness(sideGun)
    // To first order in the unevenness both are the same; the orbit is not quite a circle.
    for (const radius of [0.02, 0.03, 0.041, 0.05, 0.06]) {
      const expected = evennessFactor(sideGun.coilPair, radius, {
        centreRadialMetres: Math.abs(0.041 - radius),
      })
      const factor = 1 / table.g.value(radius) ** 2
      expectNear(factor - 1, expected - 1, { rel: 0.06 })
    }
  })

  it('tells a diameter across the line to the axis from one along it', () => {
    const across = tabulateEvenness(bottomGun)
    const along = tabulateEvenness({
      ...bottomGun,
      gun: { xMetres: 0.055, yMetres: 0, direction: { x: 0, y: 1 } },
    })
    expect(Math.abs(across.g.value(0.035) / along.g.value(0.035) - 1)).toBeGreaterThan(1e-3)
  })

  it('has slopes with radius, coil radius and separation that differences confirm', () => {
    for (const bench of [sideGun, axisGun]) {
      const table = tabulateEvenness(bench)
      const h = 2e-4
      const changed = (radius: number, separation: number) =>
        tabulateEvenness({
          ...bench,
          coilPair: {
            coils: [
              { ...bench.coilPair.coils[0], radiusMetres: bench.coilPair.coils[0].radiusMetres + radius },
              { ...bench.coilPair.coils[1], radiusMetres: bench.coilPair.coils[1].radiusMetres + radius },
            ],
            separationMetres: bench.coilPair.separationMetres + separation,
          },
        })
      const [wider, narrower, further, closer] = [
        changed(h, 0),
        changed(-h, 0),
        changed(0, h),
        changed(0, -h),
      ]
      expectNear((wider.teslaPerAmp - narrower.teslaPerAmp) / (2 * h), table.slopes.perRadiusMetre, {
        rel: 1e-4,
      })
      expectNear((further.teslaPerAmp - closer.teslaPerAmp) / (2 * h), table.slopes.perSeparationMetre, {
        rel: 1e-4,
      })
      for (const radius of [0.025, 0.045]) {
        const perRadius = (wider.g.value(radius) - narrower.g.value(radius)) / (2 * h)
        expectNear(table.gPerRadiusMetre.value(radius), perRadius, { rel: 1e-3 })
        const perSeparation = (further.g.value(radius) - closer.g.value(radius)) / (2 * h)
        expectNear(table.gPerSeparationMetre.value(radius), perSeparation, { rel: 1e-3, abs: 1e-5 })
        const step = 1e-4
        const perOrbit = (table.g.value(radius + step) - table.g.value(radius - step)) / (2 * step)
        expectNear(table.g.slope(radius), perOrbit, { rel: 1e-4 })
      }
    }
  })

  it('is the same whether tabulated beforehand or on the way', () => {
    const reading = perfectReading(sideGun, 200, 1.5, accepted)
    const evenness = tabulateEvenness(sideGun)
    expect(readingBudget({ ...reading, bench: sideGun, evenness })).toEqual(
      readingBudget({ ...reading, bench: sideGun }),
    )
  })

  it('refuses a gun outside the coils and one without direction, by name', () => {
    const at =
      (xMetres: number, y = 1) =>
      () =>
        tabulateEvenness({ ...sideGun, gun: { xMetres, yMetres: 0, direction: { x: 0, y } } })
    expect(at(0.14)).toThrow(/gun\.xMetres/)
    expect(at(Number.NaN)).toThrow(/gun\.xMetres/)
    expect(at(0.04, 0)).toThrow(/gun\.direction/)
    expect(() =>
      tabulateEvenness({ ...sideGun, coilPair: { ...sideGun.coilPair, separationMetres: 0 } }),
    ).toThrow('separationMetres')
  })
})
