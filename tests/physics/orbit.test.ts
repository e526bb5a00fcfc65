import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import { acceptedChargeToMass } from '#app/physics/accepted-value.ts'
import { chargeToMass, momentumPerCharge } from '#app/physics/charge-to-mass.ts'
import type { Coil, CoilPair } from '#app/physics/coil-field.ts'
import { centreFieldTesla, fieldTesla } from '#app/physics/coil-field.ts'
import type { Vector } from '#app/physics/orbit.ts'
import { evennessFactor, traceOrbit } from '#app/physics/orbit.ts'
import { expectNear } from '#tests/support/near.ts'
import field from './data/coil-field.json'
import motion from './data/motion.json'
import { apsides, turningPoints } from './turning-points.ts'

const accepted = acceptedChargeToMass.value

function twins(turns: number, radiusMetres: number, section: Partial<Coil> = {}): CoilPair {
  const coil = { turns, radiusMetres, ...section }
  return { coils: [coil, coil], separationMetres: radiusMetres }
}

const helmholtz = twins(130, 0.15)
const wound = twins(130, 0.15, { windingWidthMetres: 0.03, windingDepthMetres: 0.028 })
/** So large that the field over a bench-sized orbit is uniform to about 1e-9. */
const uniform = twins(1e5, 20)
const upright: Vector = { x: 0, y: 1, z: 0 }

describe('the path of an electron', () => {
  const real = motion.orbit_in_exact_helmholtz_midplane
  it.each(real.expected)(
    'turns round where another integrator says: $V V, $I A from x = $start_x_m m',
    (row) => {
      const { half } = turningPoints({
        pair: helmholtz,
        currentAmps: row.I,
        voltageVolts: row.V,
        chargeToMass: real.data.e_over_m,
        start: { x: row.start_x_m, y: 0, z: 0 },
        direction: upright,
      })
      // Source: DOP853 at 1e-12, one integrator. The tolerance is relative to the size of the orbit.
      const abs = real.tolerance.rel * row.diameter_m
      expectNear(half.x, row.half_turn_x_m, { abs })
      expectNear(half.y, row.half_turn_y_m, { abs })
      const diameter = Math.hypot(half.x - row.start_x_m, half.y)
      expectNear(diameter, row.diameter_m, { abs })
      const centre = centreFieldTesla(helmholtz, row.I)
      const momentum = momentumPerCharge({ voltageVolts: row.V, chargeToMass: real.data.e_over_m })
      expectNear((2 * momentum) / centre, row.ideal_uniform_diameter_m, { rel: 1e-12 })
      const biased = chargeToMass({ voltageVolts: row.V, fieldTesla: centre, radiusMetres: diameter / 2 })
      expectNear(biased, row.em_from_centre_field, real.tolerance)
      expectNear(biased / real.data.e_over_m - 1, row.rel_bias, { abs: 1e-8 })
    },
  )

  it('is a circle in a uniform field, of at least 100 points a turn, counter-clockwise seen from +z', () => {
    const radius =
      momentumPerCharge({ voltageVolts: 250, chargeToMass: accepted }) / centreFieldTesla(uniform, 0.3)
    const points = traceOrbit({
      pair: uniform,
      currentAmps: 0.3,
      voltageVolts: 250,
      chargeToMass: accepted,
      start: { x: radius, y: 0, z: 0 },
      direction: { x: 0, y: 7, z: 0 },
    })
    expect(points.length).toBeGreaterThan(100)
    expect(points[0]).toEqual({ x: radius, y: 0, z: 0 })
    for (const { x, y, z } of points) {
      expectNear(Math.hypot(x, y), radius, { rel: 1e-8 })
      expect(z).toBe(0)
    }
    const quarter = points[Math.round((points.length - 1) / 4)] as Vector
    expectNear(quarter.x, 0, { abs: 1e-8 * radius })
    expectNear(quarter.y, radius, { rel: 1e-8 })
    const last = points.at(-1) as Vector
    expectNear(Math.hypot(last.x - radius, last.y), 0, { abs: 1e-7 * radius })
  })

  it('turns the other way when the current is reversed', () => {
    const options = {
      pair: helmholtz,
      voltageVolts: 200,
      chargeToMass: accepted,
      start: { x: 0, y: -0.04, z: 0 },
      direction: { x: 1, y: 0, z: 0 },
    }
    const forward = traceOrbit({ ...options, currentAmps: 1.5 })
    const backward = traceOrbit({ ...options, currentAmps: -1.5, start: { x: 0, y: 0.04, z: 0 } })
    expect(Math.max(...forward.map((point) => point.y))).toBeGreaterThan(0.03)
    forward.forEach((point, i) => {
      expectNear(backward[i]?.x ?? Number.NaN, point.x, { abs: 1e-14 })
      expectNear(backward[i]?.y ?? Number.NaN, -point.y, { abs: 1e-14 })
    })
  })

  const helix = motion.helix
  it.each(helix.expected)('is a helix at $angle_to_B_deg° to the field (textbook)', (row) => {
    const current = helix.data.B_T / centreFieldTesla(uniform, 1)
    const angle = (row.angle_to_B_deg * Math.PI) / 180
    const options = {
      pair: uniform,
      currentAmps: current,
      voltageVolts: helix.data.V,
      chargeToMass: accepted,
      start: { x: 0, y: 0, z: 0 },
      direction: { x: Math.sin(angle), y: 0, z: Math.cos(angle) },
    }
    const points = traceOrbit(options)
    expectNear(points.at(-1)?.z ?? Number.NaN, row.pitch_m, { rel: 1e-7, abs: 1e-9 })
    const across = Math.max(...points.map((point) => point.y))
    expectNear(across, 2 * row.helix_radius_m, { rel: 1e-5 })
    const twoTurns = traceOrbit({ ...options, turns: 2 })
    expect(twoTurns.length - 1).toBe(2 * (points.length - 1))
    expectNear(twoTurns.at(-1)?.z ?? Number.NaN, 2 * row.pitch_m, { rel: 1e-6, abs: 1e-9 })
  })

  it('adds a stray field to the coil field: along the axis it changes the radius, across it tilts the orbit', () => {
    const options = {
      pair: uniform,
      currentAmps: 0.3,
      voltageVolts: 200,
      chargeToMass: accepted,
      start: { x: 0, y: 0, z: 0 },
      direction: { x: 1, y: 0, z: 0 },
    }
    const stray = 5e-5
    const centre = centreFieldTesla(uniform, 0.3)
    const momentum = momentumPerCharge(options)
    const along = traceOrbit({ ...options, strayFieldTesla: { x: 0, y: 0, z: stray } })
    expectNear(Math.max(...along.map((point) => point.y)), (2 * momentum) / (centre + stray), { rel: 1e-5 })
    const across = traceOrbit({ ...options, strayFieldTesla: { x: 0, y: stray, z: 0 } })
    const top = across.reduce((best, point) => (point.y > best.y ? point : best))
    expectNear(top.z / top.y, -stray / centre, { rel: 1e-4 })
  })

  it('keeps the canonical angular momentum, whatever the start', () => {
    fc.assert(
      fc.property(
        fc.double({ min: -0.05, max: 0.05, noNaN: true }),
        fc.double({ min: -0.02, max: 0.02, noNaN: true }),
        fc.double({ min: 0, max: 6.28, noNaN: true }),
        (x, z, angle) => {
          const points = traceOrbit({
            pair: helmholtz,
            currentAmps: 2,
            voltageVolts: 150,
            chargeToMass: accepted,
            start: { x, y: 0, z },
            direction: { x: Math.cos(angle), y: Math.sin(angle), z: 0.1 },
          })
          // The step length is the same throughout, which is the conservation of the speed.
          const lengths = points.slice(1).map((point, i) => {
            const before = points[i] as Vector
            return Math.hypot(point.x - before.x, point.y - before.y, point.z - before.z)
          })
          expectNear(Math.max(...lengths), Math.min(...lengths), { rel: 1e-4 })
          const reversed = traceOrbit({
            pair: helmholtz,
            currentAmps: -2,
            voltageVolts: 150,
            chargeToMass: accepted,
            start: points.at(-1) as Vector,
            direction: backwards(points),
          })
          const home = reversed.at(-1) as Vector
          expectNear(Math.hypot(home.x - x, home.y, home.z - z), 0, { abs: 2e-6 })
        },
      ),
      { numRuns: 12 },
    )
  })
})

/** Direction from the end back along the path, from three points (second order). */
function backwards(points: Vector[]): Vector {
  const [a, b, c] = [points.at(-1), points.at(-2), points.at(-3)] as [Vector, Vector, Vector]
  const component = (key: keyof Vector): number => -(1.5 * a[key] - 2 * b[key] + 0.5 * c[key])
  return { x: component('x'), y: component('y'), z: component('z') }
}

describe('the evenness factor', () => {
  it('is the inverse square of the mid-plane field for an orbit about the axis', () => {
    const pair = twins(1, 1)
    for (const { rho_over_R: radius, relative_bias_of_em: bias } of field.em_bias_if_centre_field_used
      .expected) {
      expectNear(1 / evennessFactor(pair, radius) - 1, bias, field.em_bias_if_centre_field_used.tolerance)
    }
  })

  it('goes over smoothly into the limits of a centre on the axis and of a small orbit', () => {
    const centred = evennessFactor(helmholtz, 0.05)
    let before = 0
    for (const offset of [1e-9, 1e-6, 4.9e-5, 5.1e-5, 1e-3]) {
      const factor = evennessFactor(helmholtz, 0.05, { centreRadialMetres: offset })
      expectNear(factor, centred, { abs: 1e-12 + 40 * offset ** 2 })
      expect(factor).toBeGreaterThanOrEqual(before - 1e-12)
      before = factor
    }
    const local = (centreFieldTesla(helmholtz, 1) / fieldTesla(helmholtz, 1, 0.05, 0.01).axial) ** 2
    const small = evennessFactor(helmholtz, 1e-6, { centreRadialMetres: 0.05, centreAxialMetres: 0.01 })
    expectNear(small, local, { rel: 1e-8 })
  })

  const closures: [string, CoilPair, number, number][] = [
    ['centred', helmholtz, 0.042, 0],
    ['axis inside', helmholtz, 0.05, 0.015],
    ['axis close to the path', helmholtz, 0.038, 0.038],
    ['axis outside', helmholtz, 0.02, 0.045],
    ['wide', helmholtz, 0.065, 0.02],
    ['wound, centred', wound, 0.05, 0],
    ['wound, axis inside', wound, 0.055, 0.018],
    ['wound, axis outside', wound, 0.025, 0.04],
  ]
  const constants = [accepted, 1.4e11, 2.5e11]
  it.each(closures)(
    'times e/m from the centre field gives back the constant put in: %s',
    (_name, pair, radius, offset) => {
      for (const constant of constants) {
        const voltageVolts = 220
        // A current for which the orbit has about that radius.
        const current =
          momentumPerCharge({ voltageVolts, chargeToMass: constant }) / (radius * centreFieldTesla(pair, 1))
        const { nearest, farthest } = apsides({
          pair,
          currentAmps: current,
          voltageVolts,
          chargeToMass: constant,
          start: { x: radius + offset, y: 0, z: 0 },
          direction: upright,
        })
        const sum = (farthest + nearest) / 2
        const difference = (farthest - nearest) / 2
        const [measured, centre] = offset <= radius ? [sum, difference] : [difference, sum]
        const biased = chargeToMass({
          voltageVolts,
          fieldTesla: centreFieldTesla(pair, current),
          radiusMetres: measured,
        })
        const value = biased * evennessFactor(pair, measured, { centreRadialMetres: centre })
        expectNear(value, constant, { rel: 2e-5 })
        // Without the factor the same reading is off by more than that.
        expect(Math.abs(biased / constant - 1)).toBeGreaterThan(1e-4)
      }
    },
  )

  it('refuses an orbit that reaches where the field turns round, and bad numbers, by name', () => {
    for (const call of [
      () => evennessFactor(helmholtz, 0),
      () => evennessFactor(helmholtz, Number.NaN),
      () => evennessFactor(helmholtz, 0.25),
      () => evennessFactor(helmholtz, 0.15, { centreRadialMetres: 0.1 }),
    ]) {
      expect(call).toThrow(RangeError)
      expect(call).toThrow('radiusMetres')
    }
    expect(() => evennessFactor(helmholtz, 0.05, { centreRadialMetres: -0.01 })).toThrow('centreRadialMetres')
    expect(() => evennessFactor(helmholtz, 0.05, { centreAxialMetres: Number.NaN })).toThrow(
      'centreAxialMetres',
    )
  })
})

describe('the path refuses by name', () => {
  const good = {
    pair: helmholtz,
    currentAmps: 1.5,
    voltageVolts: 200,
    chargeToMass: accepted,
    start: { x: 0.04, y: 0, z: 0 },
    direction: upright,
  }
  it.each<[string, Partial<Parameters<typeof traceOrbit>[0]>]>([
    ['currentAmps', { currentAmps: 0 }],
    ['currentAmps', { currentAmps: Number.NaN }],
    ['voltageVolts', { voltageVolts: 0 }],
    ['voltageVolts', { voltageVolts: Number.POSITIVE_INFINITY }],
    ['chargeToMass', { chargeToMass: -1 }],
    ['start.x', { start: { x: Number.NaN, y: 0, z: 0 } }],
    ['direction', { direction: { x: 0, y: 0, z: 0 } }],
    ['direction.z', { direction: { x: 0, y: 1, z: Number.NaN } }],
    ['strayFieldTesla.y', { strayFieldTesla: { x: 0, y: Number.POSITIVE_INFINITY, z: 0 } }],
    ['turns', { turns: 0 }],
    ['separationMetres', { pair: { ...helmholtz, separationMetres: -1 } }],
  ])('%s', (name, bad) => {
    expect(() => traceOrbit({ ...good, ...bad })).toThrow(RangeError)
    expect(() => traceOrbit({ ...good, ...bad })).toThrow(name)
  })
})
