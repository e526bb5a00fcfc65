import fc from 'fast-check'
import { describe, it } from 'vitest'
import { type Reading, type ReadingBench, readingBudget } from '#app/analysis/reading.ts'
import { chargeToMass } from '#app/physics/charge-to-mass.ts'
import type { Coil } from '#app/physics/coil-field.ts'
import { fieldTesla } from '#app/physics/coil-field.ts'
import { expectNear } from '#tests/support/near.ts'
import { axisGun, bottomGun } from './benches.ts'

const factor = fc.double({ min: -1, max: 1, noNaN: true }).map((power) => 10 ** power)
const log = (min: number, max: number) =>
  fc.double({ min: Math.log(min), max: Math.log(max), noNaN: true }).map(Math.exp)

describe('e/m does not change', () => {
  it('when the orbit shrinks as the field grows', () => {
    fc.assert(
      fc.property(
        log(20, 500),
        log(5e-4, 5e-3),
        log(0.01, 0.1),
        factor,
        (voltageVolts, field, radius, by) => {
          const value = chargeToMass({ voltageVolts, fieldTesla: field, radiusMetres: radius })
          const scaled = chargeToMass({ voltageVolts, fieldTesla: field * by, radiusMetres: radius / by })
          expectNear(scaled, value, { rel: 1e-12 })
        },
      ),
    )
  })

  it('but goes as 1/V when voltage and field grow alike: all energies in units of mc²', () => {
    fc.assert(
      fc.property(
        log(20, 500),
        log(5e-4, 5e-3),
        log(0.01, 0.1),
        factor,
        (voltageVolts, field, radius, by) => {
          const value = chargeToMass({ voltageVolts, fieldTesla: field, radiusMetres: radius })
          const scaled = chargeToMass({
            voltageVolts: voltageVolts * by,
            fieldTesla: field * by,
            radiusMetres: radius,
          })
          expectNear(scaled * by, value, { rel: 1e-12 })
        },
      ),
    )
  })

  it('when every length of the field is scaled together with its current', () => {
    const coil = fc.record({
      turns: log(50, 300),
      radiusMetres: log(0.1, 0.3),
      windingWidthMetres: log(0.005, 0.03),
      windingDepthMetres: log(0.005, 0.03),
    })
    const part = fc.double({ min: 0, max: 0.4, noNaN: true })
    fc.assert(
      fc.property(coil, coil, part, part, factor, (first, second, rho, z, by) => {
        const grown = (of: Coil): Coil => ({
          turns: of.turns,
          radiusMetres: of.radiusMetres * by,
          windingWidthMetres: (of.windingWidthMetres ?? 0) * by,
          windingDepthMetres: (of.windingDepthMetres ?? 0) * by,
        })
        const separationMetres = first.radiusMetres
        const at = [rho * first.radiusMetres, z * 0.5 * separationMetres] as const
        const small = fieldTesla({ coils: [first, second], separationMetres }, 1.5, ...at)
        const large = fieldTesla(
          { coils: [grown(first), grown(second)], separationMetres: separationMetres * by },
          1.5 * by,
          at[0] * by,
          at[1] * by,
        )
        expectNear(large.axial, small.axial, { rel: 1e-11 })
        expectNear(large.radial, small.radial, { abs: 1e-11 * Math.abs(small.axial) })
      }),
    )
  })
})

describe('a reading keeps its e/m and each share of its budget', () => {
  const reading: Reading = {
    voltageVolts: 250,
    uVoltageVolts: 0.03,
    currentAmps: 1.3,
    uCurrentAmps: 0.0004,
    leftEdges: [-0.0612, -0.0608],
    rightEdges: [0.0605, 0.0611],
  }
  const few = { numRuns: 8 }

  function expectSame(
    one: Reading & { bench: ReadingBench },
    other: Reading & { bench: ReadingBench },
  ): void {
    const [first, second] = [readingBudget(one), readingBudget(other)]
    expectNear(second.value, first.value, { rel: 1e-9 })
    expectNear(second.standardUncertainty, first.standardUncertainty, { rel: 1e-7 })
    for (const [name, { share }] of Object.entries(first.contributions)) {
      expectNear(second.contributions[name]?.share ?? Number.NaN, share, { abs: 1e-7 })
    }
  }

  it('on a bench of another size at the same current: the field falls as the orbit grows', () => {
    fc.assert(
      fc.property(factor, (by) => {
        expectSame(
          { ...reading, bench: bottomGun },
          { ...inLengths(reading, by), bench: grownBench(bottomGun, by) },
        )
      }),
      few,
    )
  })

  it('with more turns and as much less current', () => {
    fc.assert(
      fc.property(factor, (by) => {
        const { coils, separationMetres } = bottomGun.coilPair
        const wound = (coil: Coil): Coil => ({ ...coil, turns: coil.turns * by })
        const bench: ReadingBench = {
          ...bottomGun,
          coilPair: { coils: [wound(coils[0]), wound(coils[1])], separationMetres },
          uTurns: (bottomGun.uTurns ?? 0) * by,
          coilMeter: { ...bottomGun.coilMeter, digitSizeAmps: bottomGun.coilMeter.digitSizeAmps / by },
        }
        const currentAmps = reading.currentAmps / by
        expectSame(
          { ...reading, bench: bottomGun },
          { ...reading, currentAmps, uCurrentAmps: reading.uCurrentAmps / by, bench },
        )
      }),
      few,
    )
  })

  it('when the scale is shifted, and when the sense is reversed with the gun on the axis', () => {
    const onAxis: Reading = { ...reading, currentAmps: 2.1, leftEdges: [-0.09], rightEdges: [0] }
    fc.assert(
      fc.property(fc.double({ min: -0.5, max: 0.5, noNaN: true }), (by) => {
        const shifted = { leftEdges: [-0.09 + by], rightEdges: [by] }
        expectSame({ ...onAxis, bench: axisGun }, { ...onAxis, ...shifted, bench: axisGun })
      }),
      few,
    )
    const reversed = { ...onAxis, currentAmps: -2.1 }
    expectSame({ ...onAxis, bench: axisGun }, { ...reversed, bench: axisGun })
  })
})

/** All lengths of the reading times a factor. */
function inLengths(reading: Reading, by: number): Reading {
  return {
    ...reading,
    leftEdges: reading.leftEdges.map((edge) => edge * by),
    rightEdges: reading.rightEdges.map((edge) => edge * by),
  }
}

function grownBench(bench: ReadingBench, by: number): ReadingBench {
  const { coils, separationMetres } = bench.coilPair
  const grown = (coil: Coil): Coil => ({ ...coil, radiusMetres: coil.radiusMetres * by })
  const { scale, gun, beam } = bench
  return {
    ...bench,
    coilPair: { coils: [grown(coils[0]), grown(coils[1])], separationMetres: separationMetres * by },
    uRadiusMetres: (bench.uRadiusMetres ?? 0) * by,
    uSeparationMetres: (bench.uSeparationMetres ?? 0) * by,
    gun: { ...gun, xMetres: gun.xMetres * by, yMetres: gun.yMetres * by },
    scale: {
      ...scale,
      graduationMetres: scale.graduationMetres * by,
      distanceBehindMetres: scale.distanceBehindMetres * by,
      uDistanceBehindMetres: scale.uDistanceBehindMetres * by,
      eyeDistanceMetres: scale.eyeDistanceMetres * by,
    },
    beam: { halfWidthMetres: beam.halfWidthMetres * by },
  }
}
