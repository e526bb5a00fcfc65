import { describe, expect, it } from 'vitest'
import type { Reading, ReadingBench } from '#app/analysis/reading.ts'
import { orbitMoved, readingBudget, tabulateEvenness } from '#app/analysis/reading.ts'
import { coverageFactor, effectiveDegreesOfFreedom } from '#app/metrology/coverage.ts'
import { chargeToMass, momentumPerCharge } from '#app/physics/charge-to-mass.ts'
import { centreFieldTesla } from '#app/physics/coil-field.ts'
import { expectNear } from '#tests/support/near.ts'
import { bottomGun } from './benches.ts'

describe('the budget of a reading', () => {
  const bench: ReadingBench = {
    ...bottomGun,
    anodeMeter: { ...bottomGun.anodeMeter, correctionVolts: 0.6, uCorrectionVolts: 0.15 },
  }
  const reading: Reading = {
    voltageVolts: 250,
    uVoltageVolts: 0.03,
    voltageDegreesOfFreedom: 14,
    currentAmps: 1.3,
    uCurrentAmps: 0.0004,
    currentDegreesOfFreedom: 22,
    leftEdges: [-0.0612, -0.0608, -0.0617],
    rightEdges: [0.0605, 0.0611, 0.0609],
  }
  const result = readingBudget({ ...reading, bench })
  const emOf = (change: Partial<Reading>, other: ReadingBench = bench) =>
    readingBudget({ ...reading, ...change, bench: other }).value
  const slope = (f: (by: number) => number, h: number): number =>
    (8 * (f(h) - f(-h)) - (f(2 * h) - f(-2 * h))) / (12 * h)

  it('has the partial derivatives of its model as sensitivities', () => {
    const widened = (radius: number, separation: number, turns: number): ReadingBench => {
      const [coil] = bench.coilPair.coils
      const changed = { turns: coil.turns + turns, radiusMetres: coil.radiusMetres + radius }
      return {
        ...bench,
        coilPair: {
          coils: [changed, changed],
          separationMetres: bench.coilPair.separationMetres + separation,
        },
      }
    }
    const correction = (by: number): ReadingBench => ({
      ...bench,
      anodeMeter: { ...bench.anodeMeter, correctionVolts: 0.6 + by },
    })
    const behind = (by: number): ReadingBench => ({
      ...bench,
      scale: { ...bench.scale, distanceBehindMetres: bench.scale.distanceBehindMetres + by },
    })
    const shifted = (edges: readonly number[], by: number) => edges.map((edge) => edge + by)
    const parallax = 0.52 / 0.6
    const both = (by: number) => ({
      leftEdges: shifted(reading.leftEdges, -by / parallax),
      rightEdges: shifted(reading.rightEdges, by / parallax),
    })
    const perVolt = slope((by) => emOf({ voltageVolts: 250 + by }), 0.5)
    const perAmp = slope((by) => emOf({ currentAmps: 1.3 + by }), 0.003)
    const perLeft = slope((by) => emOf({ leftEdges: shifted(reading.leftEdges, by) }), 1e-4)
    const expected: Record<string, number> = {
      anodeVoltage: perVolt,
      anodeResolution: perVolt,
      anodeMeter: perVolt,
      anodeCorrection: slope((by) => emOf({}, correction(by)), 0.5),
      coilCurrent: perAmp,
      coilResolution: perAmp,
      coilMeter: perAmp,
      leftEdgeResolution: perLeft,
      rightEdgeResolution: -perLeft,
      edgeSpread: slope((by) => emOf({ rightEdges: shifted(reading.rightEdges, by) }), 1e-4),
      scaleDistance: slope((by) => emOf({}, behind(by)), 1e-3),
      coilTurns: slope((by) => emOf({}, widened(0, 0, by)), 0.5),
      coilRadius: slope((by) => emOf({}, widened(by, 0, 0)), 5e-4),
      coilSeparation: slope((by) => emOf({}, widened(0, by, 0)), 5e-4),
      beamEdge: slope((by) => emOf(both(by)), 1e-4),
    }
    expect(Object.keys(result.contributions).sort()).toEqual(Object.keys(expected).sort())
    for (const [name, sensitivity] of Object.entries(expected)) {
      expectNear(result.contributions[name]?.sensitivity ?? Number.NaN, sensitivity, {
        rel: 1e-6,
      })
    }
  })

  it('has the standard uncertainties of its inputs, by hand', () => {
    const u = (name: string): number => {
      const { contribution, sensitivity } = result.contributions[name] ?? {
        contribution: Number.NaN,
        sensitivity: 1,
      }
      return contribution / Math.abs(sensitivity)
    }
    const expected: Record<string, number> = {
      anodeVoltage: 0.03,
      // ±(0.1 % of 250 V + 2 × 0.1 V) and a last digit of 0.1 V, both rectangular
      anodeMeter: 0.45 / Math.sqrt(3),
      anodeResolution: 0.1 / Math.sqrt(12),
      anodeCorrection: 0.15,
      coilCurrent: 0.0004,
      coilMeter: (0.0026 + 0.003) / Math.sqrt(3),
      coilResolution: 0.001 / Math.sqrt(12),
      // half a millimetre division
      leftEdgeResolution: 0.0005 / Math.sqrt(12),
      rightEdgeResolution: 0.0005 / Math.sqrt(12),
      // Distances of 121.7, 121.9 and 122.6 mm: deviations −11/30, −5/30 and 16/30 mm from their mean.
      edgeSpread: Math.sqrt((11 ** 2 + 5 ** 2 + 16 ** 2) / 30 ** 2 / 2 / 3) / 1000,
      scaleDistance: 0.003,
      coilTurns: 0.2,
      coilRadius: 0.0008,
      coilSeparation: 0.001,
      beamEdge: 0.0004 / Math.sqrt(3),
    }
    for (const [name, value] of Object.entries(expected)) {
      expectNear(u(name), value, { rel: name === 'edgeSpread' ? 1e-9 : 1e-12 })
    }
  })

  it('adds up: shares to one, groups to their lines, common and independent parts to the whole', () => {
    const rows = Object.values(result.contributions)
    const sum = (list: number[]) => list.reduce((a, b) => a + b, 0)
    expectNear(sum(rows.map(({ share }) => share)), 1, { abs: 1e-12 })
    expectNear(Math.hypot(...rows.map(({ contribution }) => contribution)), result.standardUncertainty, {
      rel: 1e-12,
    })
    expect(result.groups.map(({ name }) => name)).toEqual([
      'anode voltage',
      'coil current',
      'edges',
      'coil pair',
      'beam',
    ])
    for (const { name, share } of result.groups) {
      expectNear(share, sum(rows.filter(({ group }) => group === name).map((row) => row.share)), {
        abs: 1e-12,
      })
      expect(share).toBeGreaterThan(0)
    }
    const common = rows.filter((row) => row.common).map(({ contribution }) => contribution)
    expectNear(result.commonUncertainty, Math.hypot(...common), { rel: 1e-12 })
    const whole = Math.hypot(result.commonUncertainty, result.independentUncertainty)
    expectNear(whole, result.standardUncertainty, { rel: 1e-12 })
  })

  it('has the degrees of freedom of the windows and of the edges, and Student’s factor', () => {
    const part = (name: string) => result.contributions[name]?.contribution ?? Number.NaN
    const rest = Math.sqrt(
      Object.entries(result.contributions)
        .filter(([name]) => !['anodeVoltage', 'coilCurrent', 'edgeSpread'].includes(name))
        .reduce((sum, [, { contribution }]) => sum + contribution ** 2, 0),
    )
    const nu = effectiveDegreesOfFreedom(
      [part('anodeVoltage'), part('coilCurrent'), part('edgeSpread'), rest],
      [14, 22, 2, Number.POSITIVE_INFINITY],
    )
    expectNear(result.effectiveDegreesOfFreedom, nu, { rel: 1e-10 })
    expectNear(result.coverageFactor, coverageFactor(nu), { rel: 1e-12 })
    expectNear(result.expandedUncertainty, result.coverageFactor * result.standardUncertainty, { rel: 1e-14 })
  })

  it('keeps the resolution of the edges with one reader, and has no spread to add', () => {
    const single = readingBudget({ ...reading, leftEdges: [-0.0612], rightEdges: [0.0608], bench })
    expect(single.contributions.leftEdgeResolution?.contribution).toBeGreaterThan(0)
    expect(single.contributions.edgeSpread).toBeUndefined()
    const agreeing = readingBudget({
      ...reading,
      leftEdges: [-0.0612, -0.0612],
      rightEdges: [0.0608, 0.0608],
      bench,
    })
    expectNear(agreeing.standardUncertainty, single.standardUncertainty, { rel: 1e-12 })
  })

  it('takes the spread of the edges as the run has it, also with one reader, and divides it by √n', () => {
    const edgeSpread = { standardDeviationMetres: 0.0004, degreesOfFreedom: 9 }
    const spreadOf = (edges: Pick<Reading, 'leftEdges' | 'rightEdges'>) => {
      const { contributions } = readingBudget({ ...reading, ...edges, edgeSpread, bench })
      const { contribution, sensitivity, common } = contributions.edgeSpread ?? {
        contribution: Number.NaN,
        sensitivity: 1,
        common: true,
      }
      expect(common).toBe(false)
      return contribution / Math.abs(sensitivity)
    }
    expectNear(spreadOf({ leftEdges: [-0.0612], rightEdges: [0.0608] }), 0.0004, { rel: 1e-12 })
    expectNear(spreadOf(reading), 0.0004 / Math.sqrt(3), { rel: 1e-12 })
    const alone = readingBudget({ ...reading, leftEdges: [-0.0612], rightEdges: [0.0608], edgeSpread, bench })
    const parts = Object.entries(alone.contributions).map(([name, { contribution }]) => [name, contribution])
    const nu: Record<string, number> = { anodeVoltage: 14, coilCurrent: 22, edgeSpread: 9 }
    expectNear(
      alone.effectiveDegreesOfFreedom,
      effectiveDegreesOfFreedom(
        parts.map(([, part]) => part as number),
        parts.map(([name]) => nu[name as string] ?? Number.POSITIVE_INFINITY),
      ),
      { rel: 1e-12 },
    )
  })

  it('takes half of the measured current through each coil in parallel, all of it in series', () => {
    const parallel = readingBudget({ ...reading, bench: { ...bench, coilConnection: 'parallel' } })
    expect(parallel.currentPerCoilAmps).toBe(0.65)
    expect(result.currentPerCoilAmps).toBe(1.3)
    const doubled = readingBudget({
      ...reading,
      currentAmps: 2.6,
      bench: { ...bench, coilConnection: 'parallel' },
    })
    expectNear(doubled.value, result.value, { rel: 1e-12 })
  })

  it('lets a measured field factor take the place of the geometry', () => {
    const teslaPerAmp = centreFieldTesla(bench.coilPair, 1) * 1.01
    const measured = readingBudget({
      ...reading,
      bench: { ...bench, fieldFactor: { teslaPerAmp, standardUncertainty: 2e-6 } },
    })
    expect(measured.contributions.coilRadius).toBeUndefined()
    const { contribution } = measured.contributions.fieldFactor ?? { contribution: Number.NaN }
    // e/m falls with the square of the factor; the relativistic term adds some 10⁻⁴ to the 2.
    expectNear(contribution, ((2 * measured.value) / teslaPerAmp) * 2e-6, { rel: 1e-3 })
    expectNear(measured.value, result.value / 1.01 ** 2, { rel: 1e-4 })
  })

  it('adds the meter’s correction to the voltage', () => {
    const { teslaPerAmp, g } = tabulateEvenness(bench)
    const radius = result.diameterMetres / 2
    expectNear(result.fieldTesla, teslaPerAmp * 1.3 * g.value(radius), { rel: 1e-12 })
    const direct = chargeToMass({ voltageVolts: 250.6, fieldTesla: result.fieldTesla, radiusMetres: radius })
    expect(result.value).toBe(direct)
    expectNear(momentumPerCharge({ voltageVolts: 250.6, chargeToMass: direct }), result.fieldTesla * radius, {
      rel: 1e-12,
    })
  })

  it.each<[string, () => unknown]>([
    ['voltageVolts', () => emOf({ voltageVolts: 0 })],
    ['voltageVolts', () => emOf({ voltageVolts: 1e6 })],
    ['uVoltageVolts', () => emOf({ uVoltageVolts: -1 })],
    ['voltageDegreesOfFreedom', () => emOf({ voltageDegreesOfFreedom: 0 })],
    ['currentAmps', () => emOf({ currentAmps: 0 })],
    ['currentAmps', () => emOf({ currentAmps: Number.NaN })],
    ['uCurrentAmps', () => emOf({ uCurrentAmps: Number.POSITIVE_INFINITY })],
    ['leftEdges', () => emOf({ leftEdges: [] })],
    ['rightEdges[1]', () => emOf({ rightEdges: [0.06, Number.NaN, 0.06] })],
    ['rightEdges', () => emOf({ leftEdges: [0.07] })],
    ['rightEdges', () => emOf({ leftEdges: [0.07], rightEdges: [0.06] })],
    [
      'edgeSpread.degreesOfFreedom',
      () => emOf({ edgeSpread: { standardDeviationMetres: 1, degreesOfFreedom: 0 } }),
    ],
    [
      'edgeSpread.standardDeviationMetres',
      () => emOf({ edgeSpread: { standardDeviationMetres: -1, degreesOfFreedom: 1 } }),
    ],
    ['leftEdges', () => emOf({ leftEdges: [-0.4], rightEdges: [0.06] })],
    [
      'scale.eyeDistanceMetres',
      () => emOf({}, { ...bench, scale: { ...bench.scale, eyeDistanceMetres: 0.05 } }),
    ],
    [
      'scale.graduationMetres',
      () => emOf({}, { ...bench, scale: { ...bench.scale, graduationMetres: Number.NaN } }),
    ],
    ['beam.halfWidthMetres', () => emOf({}, { ...bench, beam: { halfWidthMetres: -1 } })],
    ['anodeMeter.digits', () => emOf({}, { ...bench, anodeMeter: { ...bench.anodeMeter, digits: -1 } })],
    [
      'coilMeter.digitSizeAmps',
      () => emOf({}, { ...bench, coilMeter: { ...bench.coilMeter, digitSizeAmps: Number.NaN } }),
    ],
    ['uRadiusMetres', () => emOf({}, { ...bench, uRadiusMetres: -1 })],
    [
      'fieldFactor.teslaPerAmp',
      () => emOf({}, { ...bench, fieldFactor: { teslaPerAmp: 0, standardUncertainty: 1 } }),
    ],
  ])('refuses %s by name', (name, call) => {
    expect(call).toThrow(RangeError)
    expect(call).toThrow(name)
  })
})

describe('the edges must be read again', () => {
  const before = { voltageVolts: 200, currentAmps: 1.5 }
  const moved = (now: Partial<typeof before>) =>
    orbitMoved({ before, now: { ...before, ...now }, radiusMetres: 0.04, resolutionMetres: 0.0005 })

  it('once the predicted radius, as √V/I, has moved by more than the resolution', () => {
    expect(moved({})).toBe(false)
    // 0.0005/0.04 = 1.25 %: 2.5 % in the voltage, 1.25 % in the current.
    expect(moved({ voltageVolts: 204.9 })).toBe(false)
    expect(moved({ voltageVolts: 205.2 })).toBe(true)
    expect(moved({ voltageVolts: 195 })).toBe(true)
    expect(moved({ currentAmps: 1.482 })).toBe(false)
    expect(moved({ currentAmps: 1.48 })).toBe(true)
    expect(moved({ voltageVolts: 400, currentAmps: 1.5 * Math.SQRT2 })).toBe(false)
  })

  it('when the sense has been reversed', () => {
    expect(moved({ currentAmps: -1.5 })).toBe(true)
  })

  it('and it refuses by name', () => {
    expect(() => moved({ voltageVolts: 0 })).toThrow('now.voltageVolts')
    expect(() => moved({ currentAmps: 0 })).toThrow('now.currentAmps')
    const call = (change: object) => () =>
      orbitMoved({ before, now: before, radiusMetres: 0.04, resolutionMetres: 0.0005, ...change })
    expect(call({ before: { voltageVolts: Number.NaN, currentAmps: 1 } })).toThrow('before.voltageVolts')
    expect(call({ radiusMetres: 0 })).toThrow('radiusMetres')
    expect(call({ resolutionMetres: -1 })).toThrow('resolutionMetres')
  })
})
