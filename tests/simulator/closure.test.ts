import { describe, expect, it } from 'vitest'
import { acceptedChargeToMass } from '#app/physics/accepted-value.ts'
import { chargeToMass } from '#app/physics/charge-to-mass.ts'
import { centreFieldTesla } from '#app/physics/coil-field.ts'
import { evennessFactor } from '#app/physics/orbit.ts'
import { demoScenario, ideal } from '#bridge/simulator/scenario.ts'
import { createWorkbench, type Workbench } from './workbench.ts'

/** Settings of each bench, and the left end of its scale: what lies beyond cannot be read and is passed over. */
const grids = {
  'bench-1': { volts: [120, 160, 200, 250, 300], amps: [1.4, 1.7, 2], scaleEndMetres: -0.06 },
  'bench-2': { volts: [100, 150, 200, 280], amps: [2.1, 2.5, 3], scaleEndMetres: -0.08 },
  'bench-3': { volts: [100, 150, 200, 250], amps: [1.6, 1.9, 2.2], scaleEndMetres: -0.07 },
}

/** e/m from what the meters say over SCPI and the edges of the orbit, with no view of the model's inside. */
function readChargeToMass(bench: Workbench): number {
  const { coilPair } = bench.bench.scenario
  const [voltageVolts = 0] = bench.measure('anode-meter', 'MEAS:VOLT:DC?')
  const [currentAmps = 0] = bench.measure('coil-meter', 'MEAS:CURR:DC?')
  const { leftMetres, rightMetres } = bench.ask<{ leftMetres: number; rightMetres: number }>('turning-points')
  const radiusMetres = (rightMetres - leftMetres) / 2
  const centreRadialMetres = Math.abs(rightMetres + leftMetres) / 2
  const fromCentreField = chargeToMass({
    voltageVolts,
    fieldTesla: centreFieldTesla(coilPair, currentAmps),
    radiusMetres,
  })
  return fromCentreField * evennessFactor(coilPair, radiusMetres, { centreRadialMetres })
}

describe('closure: the constant put into the simulator comes out of its answers', () => {
  const constants = [acceptedChargeToMass.value, 1.6e11, 2.1e11]
  const cases = Object.entries(grids).flatMap(([benchId, grid]) =>
    constants.map((constant) => ({ benchId, grid, constant })),
  )

  it.each(cases)('to 5 parts in 10⁴ on $benchId with $constant C/kg', ({ benchId, grid, constant }) => {
    const bench = createWorkbench({ scenario: ideal(demoScenario, { chargeToMass: constant }), benchId })
    bench.bringUp(100, 1)
    let read = 0
    for (const volts of grid.volts) {
      for (const amps of grid.amps) {
        bench.say('supply', `VOLT ${volts},(@2);:CURR ${amps},(@3)`)
        bench.wait(3)
        const { leftMetres } = bench.ask<{ leftMetres: number | null }>('turning-points')
        if (leftMetres === null || leftMetres < grid.scaleEndMetres) continue
        expect(Math.abs(readChargeToMass(bench) / constant - 1)).toBeLessThan(5e-4)
        read++
      }
    }
    expect(read).toBeGreaterThanOrEqual(9)
  })

  it('would not come out with the centre field alone: the orbit is off the axis', () => {
    const bench = createWorkbench({ scenario: ideal(demoScenario), benchId: 'bench-2' })
    bench.bringUp(280, 2.1)
    const { leftMetres, rightMetres } = bench.ask<{ leftMetres: number; rightMetres: number }>(
      'turning-points',
    )
    const uncorrected = chargeToMass({
      voltageVolts: 280,
      fieldTesla: centreFieldTesla(bench.bench.scenario.coilPair, 2.1),
      radiusMetres: (rightMetres - leftMetres) / 2,
    })
    expect(Math.abs(uncorrected / acceptedChargeToMass.value - 1)).toBeGreaterThan(5e-4)
  })
})

describe('a real bench of the demo', () => {
  it('gives e/m within two percent although its instruments err', () => {
    const bench = createWorkbench({ benchId: 'bench-1', seed: 9 })
    bench.bringUp(250, 1.7)
    expect(Math.abs(readChargeToMass(bench) / acceptedChargeToMass.value - 1)).toBeLessThan(0.02)
  })

  it('is further off where there is a stray field and a meter that reads high', () => {
    const bench = createWorkbench({ benchId: 'bench-2', seed: 9 })
    bench.bringUp(150, 2.1)
    expect(Math.abs(readChargeToMass(bench) / acceptedChargeToMass.value - 1)).toBeGreaterThan(0.02)
  })
})
