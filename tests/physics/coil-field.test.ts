import fc from 'fast-check'
import { describe, expect, it } from 'vitest'
import type { CoilPair } from '#app/physics/coil-field.ts'
import { centreFieldTesla, fieldTesla, vectorPotentialTeslaMetres } from '#app/physics/coil-field.ts'
import { expectNear } from '#tests/support/near.ts'
import field from './data/coil-field.json'
import offAxis from './data/coil-field-off-axis.json'

function twins(turns: number, radiusMetres: number, separationMetres: number, section = {}): CoilPair {
  const coil = { turns, radiusMetres, ...section }
  return { coils: [coil, coil], separationMetres }
}

type PairData = {
  coil_at_minus: { N: number; R_m: number }
  coil_at_plus: { N: number; R_m: number }
  separation_m: number
}

function pairOf({ coil_at_minus, coil_at_plus, separation_m }: PairData): CoilPair {
  return {
    coils: [
      { turns: coil_at_minus.N, radiusMetres: coil_at_minus.R_m },
      { turns: coil_at_plus.N, radiusMetres: coil_at_plus.R_m },
    ],
    separationMetres: separation_m,
  }
}

describe('field of a thin coil pair', () => {
  const ideal = Object.entries(field).filter(([id]) => id.startsWith('ideal_'))
  it.each(ideal)('has (4/5)^{3/2} μ₀NI/R at the centre: %s', (_id, entry) => {
    const { data, expected, tolerance } = entry as typeof field.ideal_N1_R1_I1
    const pair = twins(data.turns_per_coil, data.radius_m, data.separation_m)
    expectNear(centreFieldTesla(pair, data.current_A), expected.B_centre_T, tolerance)
    expectNear(centreFieldTesla(pair, 1), expected.B_per_amp_T, tolerance)
    const { value, eight_over_5sqrt5 } = field.factor_4_5_3_2.expected
    expectNear((expected.B_per_amp_T * data.radius_m) / data.turns_per_coil / data.mu0, value, { rel: 1e-14 })
    expectNear(value, eight_over_5sqrt5, { rel: 1e-15 })
  })

  const onAxis = Object.entries(field).filter(([id]) => id.startsWith('onaxis_'))
  it.each(onAxis)('is the sum of two loops on the axis, twins or not (textbook): %s', (_id, entry) => {
    const { data, expected, tolerance } = entry as (typeof field)['onaxis_N130_130_R0.15_0.15_s0.16']
    for (const point of expected) {
      const { axial, radial } = fieldTesla(pairOf(data), data.current_A, 0, point.z_m)
      expectNear(axial, point.Bz_T, tolerance)
      expect(radial).toBe(0)
    }
  })

  it.each(Object.entries(offAxis))('agrees off the axis with Biot-Savart quadrature: %s', (_id, entry) => {
    for (const point of entry.expected) {
      const { axial, radial } = fieldTesla(pairOf(entry.data), entry.data.current_A, point.rho_m, point.z_m)
      const abs = entry.tolerance.rel_to_magnitude * Math.hypot(point.Brho_T, point.Bz_T)
      expectNear(axial, point.Bz_T, { abs })
      expectNear(radial, point.Brho_T, { abs })
    }
  })

  it('falls off along the radius and the axis as the exact field does (Biot-Savart)', () => {
    const pair = twins(1, 1, 1)
    const centre = centreFieldTesla(pair, 1)
    for (const row of field.midplane_falloff.expected) {
      const ratio = fieldTesla(pair, 1, row.rho_over_R, 0).axial / centre
      expectNear(ratio, row.Bz_over_B0, field.midplane_falloff.tolerance)
      const { rho_over_R: rho, series_4th } = row
      expectNear(1 - (54 / 125) * rho ** 4, series_4th, { abs: 1e-12 })
      expectNear(ratio, series_4th, { abs: 0.6 * rho ** 6 })
    }
    for (const row of field.axis_falloff.expected) {
      const ratio = fieldTesla(pair, 1, 0, row.z_over_R).axial / centre
      expectNear(ratio, row.Bz_over_B0, field.axis_falloff.tolerance)
      expectNear(ratio, row.series_4th, { abs: 1.3 * row.z_over_R ** 6 })
    }
    const { c0, c2, c4, c6, c8 } = field.axis_series_coefficients.expected
    const z = 0.04
    const series = c0 + c2 * z ** 2 + c4 * z ** 4 + c6 * z ** 6 + c8 * z ** 8
    expectNear(fieldTesla(pair, 1, 0, z).axial / centre, series, { abs: 1e-12 })
  })

  it('gives a single loop (Smythe 7.10), with nothing cancelling close to the axis', () => {
    const { data, expected, tolerance } = field.single_loop_unit
    // The other coil is far away and has next to no turns.
    const one = { turns: data.NI, radiusMetres: data.radius_m }
    const far = 1000
    const pair: CoilPair = { coils: [one, { turns: 1e-300, radiusMetres: 1 }], separationMetres: far }
    for (const point of expected) {
      const { radial, axial } = fieldTesla(pair, 1, point.rho_over_a, point.z_over_a - far / 2)
      const abs = tolerance.rel_to_magnitude * Math.hypot(point.Brho_T, point.Bz_T)
      expectNear(axial, point.Bz_T, { abs })
      expectNear(radial, point.Brho_T, { abs: 1e-10 * Math.abs(point.Brho_T) + 1e-300 })
    }
  })

  it('moves with radius and separation as the derivatives of the centre field say', () => {
    // Closed form for separation = radius: d ln B/d ln R = −2/5, d ln B/d ln s = −3/5.
    const h = 1e-5
    const slope = (plus: CoilPair, minus: CoilPair): number =>
      (Math.log(centreFieldTesla(plus, 1)) - Math.log(centreFieldTesla(minus, 1))) / (2 * h)
    expectNear(slope(twins(1, 1 + h, 1), twins(1, 1 - h, 1)), -0.4, { abs: 1e-9 })
    expectNear(slope(twins(1, 1, 1 + h), twins(1, 1, 1 - h)), -0.6, { abs: 1e-9 })
  })
})

describe('field of windings with a section', () => {
  const { data, expected, tolerance } = field.finite_winding_cross_section
  it.each(expected)('$axial_width_m by $radial_depth_m m has the centre field of its section', (row) => {
    const section = { windingWidthMetres: row.axial_width_m, windingDepthMetres: row.radial_depth_m }
    const pair = twins(data.N, data.mean_R_m, data.separation_m, section)
    const centre = centreFieldTesla(pair, data.I)
    expectNear(centre, row.B_centre_T, tolerance)
    const thin = centreFieldTesla(twins(data.N, data.mean_R_m, data.separation_m), data.I)
    expectNear(centre / thin, row.ratio_to_thin, tolerance)
  })

  it('equals a pile of thin coils, also close to the winding', () => {
    const radius = 0.15
    const [width, depth, layers] = [0.02, 0.012, 240]
    const coil = { turns: 100, radiusMetres: radius, windingWidthMetres: width, windingDepthMetres: depth }
    const pair: CoilPair = { coils: [coil, { ...coil, turns: 1e-300 }], separationMetres: 0.15 }
    for (const [rho, z] of [
      [0.06, 0],
      [0.12, -0.06],
      [0.13, -0.075],
      [0.165, -0.09],
    ] as const) {
      let radial = 0
      let axial = 0
      let potential = 0
      for (let i = 0; i < layers; i++) {
        for (let j = 0; j < layers; j++) {
          const thin = { turns: 100 / layers ** 2, radiusMetres: radius + depth * ((i + 0.5) / layers - 0.5) }
          const shift = width * ((j + 0.5) / layers - 0.5)
          const single: CoilPair = {
            coils: [thin, { turns: 1e-300, radiusMetres: 1 }],
            separationMetres: 0.15,
          }
          const part = fieldTesla(single, 1, rho, z - shift)
          radial += part.radial
          axial += part.axial
          potential += vectorPotentialTeslaMetres(single, 1, rho, z - shift)
        }
      }
      const whole = fieldTesla(pair, 1, rho, z)
      // The midpoint sum converges as 1/layers².
      const abs = 3e-5 * Math.hypot(radial, axial)
      expectNear(whole.radial, radial, { abs })
      expectNear(whole.axial, axial, { abs })
      expectNear(vectorPotentialTeslaMetres(pair, 1, rho, z), potential, { rel: 3e-5 })
    }
  })
})

const pairs = fc.record({
  turns: fc.tuple(fc.integer({ min: 1, max: 400 }), fc.integer({ min: 1, max: 400 })),
  radii: fc.tuple(
    fc.double({ min: 0.05, max: 0.4, noNaN: true }),
    fc.double({ min: 0.05, max: 0.4, noNaN: true }),
  ),
  separation: fc.double({ min: 0.05, max: 0.4, noNaN: true }),
  width: fc.constantFrom(0, 0.01),
  depth: fc.constantFrom(0, 0.01),
})
const insides = fc.record({
  rho: fc.double({ min: 0, max: 0.03, noNaN: true }),
  z: fc.double({ min: -0.015, max: 0.015, noNaN: true }),
})
type Drawn = {
  turns: [number, number]
  radii: [number, number]
  separation: number
  width: number
  depth: number
}

function drawnPair({ turns, radii, separation, width, depth }: Drawn): CoilPair {
  const coil = (i: 0 | 1) => ({
    turns: turns[i],
    radiusMetres: radii[i],
    windingWidthMetres: width,
    windingDepthMetres: depth,
  })
  return { coils: [coil(0), coil(1)], separationMetres: separation }
}

describe('any coil pair', () => {
  it('has a mirrored field when its coils change places', () => {
    fc.assert(
      fc.property(pairs, insides, (drawn, { rho, z }) => {
        const pair = drawnPair(drawn)
        const swapped: CoilPair = { ...pair, coils: [pair.coils[1], pair.coils[0]] }
        const here = fieldTesla(pair, 1.3, rho, z)
        const there = fieldTesla(swapped, 1.3, rho, -z)
        expectNear(there.axial, here.axial, { rel: 1e-12 })
        expectNear(there.radial, -here.radial, { abs: 1e-12 * Math.abs(here.axial) })
      }),
    )
  })

  it('has a field proportional to the current, of both signs', () => {
    fc.assert(
      fc.property(
        pairs,
        insides,
        fc.double({ min: -5, max: 5, noNaN: true }),
        (drawn, { rho, z }, current) => {
          const unit = fieldTesla(drawnPair(drawn), 1, rho, z)
          const scaled = fieldTesla(drawnPair(drawn), current, rho, z)
          expectNear(scaled.axial, current * unit.axial, { rel: 1e-12, abs: 1e-25 })
          expectNear(scaled.radial, current * unit.radial, { rel: 1e-12, abs: 1e-25 })
        },
      ),
    )
  })

  it('has a field without divergence and without curl', () => {
    fc.assert(
      fc.property(pairs, insides, (drawn, inside) => {
        const pair = drawnPair(drawn)
        const h = 2e-4
        const rho = inside.rho + 2 * h
        const at = (dr: number, dz: number) => fieldTesla(pair, 1, rho + dr, inside.z + dz)
        const scale = Math.abs(at(0, 0).axial) / 0.05
        const slope = (f: (d: number) => number): number =>
          (8 * (f(h) - f(-h)) - (f(2 * h) - f(-2 * h))) / (12 * h)
        const radialOfRadial = slope((d) => (rho + d) * at(d, 0).radial) / rho
        const axialOfAxial = slope((d) => at(0, d).axial)
        const axialOfRadial = slope((d) => at(0, d).radial)
        const radialOfAxial = slope((d) => at(d, 0).axial)
        expectNear(radialOfRadial + axialOfAxial, 0, { abs: 1e-7 * scale })
        expectNear(axialOfRadial - radialOfAxial, 0, { abs: 1e-7 * scale })
      }),
    )
  })

  it('is the curl of its vector potential', () => {
    fc.assert(
      fc.property(pairs, insides, (drawn, inside) => {
        const pair = drawnPair(drawn)
        const h = 2e-4
        const rho = inside.rho + 2 * h
        const potential = (dr: number, dz: number) =>
          vectorPotentialTeslaMetres(pair, 1, rho + dr, inside.z + dz)
        const slope = (f: (d: number) => number): number =>
          (8 * (f(h) - f(-h)) - (f(2 * h) - f(-2 * h))) / (12 * h)
        const { radial, axial } = fieldTesla(pair, 1, rho, inside.z)
        const abs = 1e-7 * Math.abs(axial)
        expectNear(slope((d) => (rho + d) * potential(d, 0)) / rho, axial, { abs })
        expectNear(-slope((d) => potential(0, d)), radial, { abs })
      }),
    )
  })
})

describe('the coil field refuses by name', () => {
  const good = twins(130, 0.15, 0.15)
  it.each<[string, () => unknown]>([
    ['separationMetres', () => centreFieldTesla(twins(130, 0.15, 0), 1)],
    ['coils[0].radiusMetres', () => centreFieldTesla(twins(130, -0.15, 0.15), 1)],
    [
      'coils[1].turns',
      () => centreFieldTesla({ ...good, coils: [good.coils[0], { turns: 0, radiusMetres: 1 }] }, 1),
    ],
    ['coils[0].windingWidthMetres', () => centreFieldTesla(twins(1, 1, 1, { windingWidthMetres: -1 }), 1)],
    ['coils[0].windingDepthMetres', () => centreFieldTesla(twins(1, 1, 1, { windingDepthMetres: 2 }), 1)],
    [
      'coils[0].windingDepthMetres',
      () => centreFieldTesla(twins(1, 1, 1, { windingDepthMetres: Number.NaN }), 1),
    ],
    ['currentAmps', () => centreFieldTesla(good, Number.NaN)],
    ['currentAmps', () => fieldTesla(good, Number.POSITIVE_INFINITY, 0, 0)],
    ['rhoMetres', () => fieldTesla(good, 1, -0.01, 0)],
    ['zMetres', () => vectorPotentialTeslaMetres(good, 1, 0, Number.NaN)],
    ['rhoMetres and zMetres', () => fieldTesla(good, 1, 0.15, 0.075)],
    ['rhoMetres and zMetres', () => fieldTesla(twins(1, 1, 1, { windingWidthMetres: 0.1 }), 1, 1, 0.52)],
  ])('%s', (name, call) => {
    expect(call).toThrow(RangeError)
    expect(call).toThrow(name)
  })
})
