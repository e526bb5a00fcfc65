import { describe, expect, it } from 'vitest'
import { orbitRadiusMetres } from '#app/physics/charge-to-mass.ts'
import { centreFieldTesla } from '#app/physics/coil-field.ts'
import { Beam } from '#bridge/simulator/model/beam.ts'
import { type BenchScenario, demoScenario, ideal } from '#bridge/simulator/scenario.ts'

const scenarioOf = (benchId: string, from = demoScenario): BenchScenario => {
  const found = from.benches.find((bench) => bench.benchId === benchId)
  if (!found) throw new Error(`no ${benchId}`)
  return found
}
const extremes = (points: [number, number][]) => ({
  left: Math.min(...points.map(([x]) => x)),
  right: Math.max(...points.map(([x]) => x)),
})

describe('the beam', () => {
  it('leaves the gun upwards and turns counter-clockwise in a positive field', () => {
    const orbit = new Beam(scenarioOf('bench-1')).orbit(200, 1.5)
    const [first, second] = orbit?.points ?? []
    const quarter = orbit?.points[180]
    const last = orbit?.points.at(-1)
    expect(first).toEqual({ x: 0.041, y: 0, z: 0 })
    expect(second?.y).toBeGreaterThan(0)
    expect(quarter?.x).toBeLessThan(0.01)
    expect(quarter?.y).toBeGreaterThan(0.03)
    // It ends at the body of the gun, 8 mm behind its opening.
    expect(last?.y).toBeGreaterThan(-0.0085)
    expect(last?.y).toBeLessThan(-0.007)
  })

  it('has about the diameter of the central field', () => {
    const scenario = scenarioOf('bench-1')
    const turning = new Beam(scenario).orbit(200, 1.5)?.turningPoints
    const radius = orbitRadiusMetres({
      voltageVolts: 200,
      fieldTesla: centreFieldTesla(scenario.coilPair, 1.5),
      chargeToMass: scenario.chargeToMass,
    })
    expect(turning?.rightMetres).toBeCloseTo(0.041, 4)
    expect(((turning?.rightMetres ?? 0) - (turning?.leftMetres ?? 0)) / (2 * radius)).toBeCloseTo(1, 2)
  })

  it('turns the other way with the current reversed and ends at the glass', () => {
    const scenario = scenarioOf('bench-1')
    const orbit = new Beam(scenario).orbit(200, -1.5)
    const last = orbit?.points.at(-1)
    expect(orbit).toMatchObject({ isClosed: false, turningPoints: null })
    expect(last?.x).toBeGreaterThan(0.041)
    expect(Math.hypot(last?.x ?? 0, last?.y ?? 0, last?.z ?? 0)).toBeCloseTo(scenario.bulbRadiusMetres, 3)
  })

  it('ends at the glass where the field is too weak, and goes nearly straight without one', () => {
    const beam = new Beam(scenarioOf('bench-1'))
    expect(beam.orbit(300, 0.8)).toMatchObject({ isClosed: false, turningPoints: null })
    const straight = beam.orbit(300, 0)
    expect(straight?.points.at(-1)?.x).toBeCloseTo(0.041, 3)
    expect(straight?.points.at(-1)?.y).toBeCloseTo(Math.sqrt(0.08 ** 2 - 0.041 ** 2), 3)
  })

  it('passes from the weak field to the strong one without a jump', () => {
    const beam = new Beam(scenarioOf('bench-2', ideal(demoScenario)))
    const ends = [0.3, 0.31, 0.32, 0.33, 0.34, 0.35, 0.36, 0.37, 0.38, 0.39, 0.4, 0.41, 0.42].map(
      (amps) => beam.orbit(280, amps)?.points.at(-1)?.x ?? Number.NaN,
    )
    const changes = ends.slice(1).map((end, index) => end - (ends[index] ?? Number.NaN))
    for (const change of changes) {
      expect(change).toBeLessThan(0)
      expect(change).toBeGreaterThan(-0.004)
    }
  })

  it('is bent by the stray field alone with the coils off', () => {
    const last = new Beam(scenarioOf('bench-2')).orbit(100, 0)?.points.at(-1)
    expect(last?.x).toBeLessThan(-0.001)
  })

  it('is wider or narrower by the stray field along the axis, and differs when reversed', () => {
    const beam = new Beam(scenarioOf('bench-2'))
    const width = (amps: number) => {
      const turning = beam.orbit(150, amps)?.turningPoints
      return (turning?.rightMetres ?? Number.NaN) - (turning?.leftMetres ?? Number.NaN)
    }
    const coilField = centreFieldTesla(scenarioOf('bench-2').coilPair, 2)
    expect(width(-2) / width(2)).toBeCloseTo((coilField + 28e-6) / (coilField - 28e-6), 2)
  })
})

describe('the picture', () => {
  it('is a closed line of some two hundred points, rounded to 0.2 mm', () => {
    const picture = new Beam(scenarioOf('bench-1')).picture(200, 1.5, 0.0014)
    expect(picture.points.length).toBeGreaterThan(120)
    expect(picture.points.length).toBeLessThan(240)
    expect(picture.points[0]).toEqual(picture.points.at(-1))
    for (const coordinate of picture.points.flat()) {
      expect(Math.abs(coordinate * 5 - Math.round(coordinate * 5))).toBeLessThan(1e-9)
    }
  })

  it('lies half a glow width inside the orbit of full energy', () => {
    const scenario = scenarioOf('bench-1')
    const beam = new Beam(scenario)
    const turning = beam.orbit(200, 1.5)?.turningPoints
    const { left, right } = extremes(beam.picture(200, 1.5, 0.0014).points)
    expect(right).toBeCloseTo((turning?.rightMetres ?? 0) * 1000 - 0.6, 0)
    expect(left).toBeCloseTo((turning?.leftMetres ?? 0) * 1000 + 0.6, 0)
  })

  it('is magnified by parallax against a ruler behind the beam: L/(L − δ) = 0.6/0.52', () => {
    const scenario = scenarioOf('bench-2')
    const beam = new Beam(scenario)
    const turning = beam.orbit(150, 2)?.turningPoints
    const picture = beam.picture(150, 2, 0.0014)
    const { left } = extremes(picture.points)
    expect(Math.abs(left - (((turning?.leftMetres ?? 0) * 1000 + 0.6) * 0.6) / 0.52)).toBeLessThan(0.2)
    expect(picture.widthMillimetres).toBeCloseTo((1.2 * 0.6) / 0.52, 2)
  })

  it('stops at the glass and stays open there', () => {
    const picture = new Beam(scenarioOf('bench-1')).picture(300, 0.8, 0.0026)
    expect(picture.points.length).toBeGreaterThan(20)
    expect(picture.points[0]).not.toEqual(picture.points.at(-1))
    for (const [x, y] of picture.points) expect(Math.hypot(x, y)).toBeLessThan(80.5)
  })

  it('is not traced again while voltage and current stand still', () => {
    const beam = new Beam(scenarioOf('bench-3', ideal(demoScenario)))
    const first = beam.orbit(200, 1.8)
    expect(beam.orbit(200, 1.8)).toBe(first)
    expect(beam.orbit(201, 1.8)).not.toBe(first)
  })
})
