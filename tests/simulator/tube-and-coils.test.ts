import { describe, expect, it } from 'vitest'
import { coilTemperatureCelsius } from '#app/physics/coil-heating.ts'
import { demoScenario, ideal } from '#bridge/simulator/scenario.ts'
import { createWorkbench } from './workbench.ts'

describe('heater and emission', () => {
  it('gives hardly any anode current when cold and most of it after the warm-up of 10 s', () => {
    const bench = createWorkbench()
    const anodeAmps = () => bench.bench.model.anodeAmps
    bench.say('supply', 'VOLT 200,(@2);:VOLT 6.3,(@1);:OUTP ON,(@1,2)')
    bench.wait(1)
    expect(anodeAmps()).toBeLessThan(1e-9)
    bench.wait(9)
    const atTen = anodeAmps()
    bench.wait(60)
    expect(atTen).toBeGreaterThan(0.98 * anodeAmps())
    expect(anodeAmps()).toBeGreaterThan(0.0005)
  })

  it('rises with the voltage as space charge lets it and saturates at a cool cathode', () => {
    const bench = createWorkbench()
    const currentAt = (volts: number) => {
      bench.say('supply', `VOLT ${volts},(@2)`)
      bench.wait(1)
      return bench.bench.model.anodeAmps
    }
    bench.bringUp(100, 0)
    // Child-Langmuir: current as the power 3/2 of the voltage.
    expect(currentAt(200) / currentAt(100)).toBeCloseTo(2 ** 1.5, 1)
    bench.say('supply', 'VOLT 3,(@1)')
    bench.wait(30)
    expect(currentAt(300) / currentAt(150)).toBeLessThan(1.2)
  })

  it('glows brighter with more anode current and not at all without', () => {
    const bench = createWorkbench()
    const brightness = () => bench.bench.picture().brightness
    bench.bringUp(0, 1.5)
    expect(bench.bench.picture()).toMatchObject({ points: [], brightness: 0 })
    bench.say('supply', 'VOLT 120,(@2)')
    bench.wait(1)
    const dim = brightness()
    bench.say('supply', 'VOLT 250,(@2)')
    bench.wait(1)
    expect(dim).toBeGreaterThan(0.1)
    expect(brightness()).toBeGreaterThan(dim + 0.1)
    bench.say('supply', 'OUTP OFF,(@1)')
    bench.wait(20)
    expect(bench.bench.picture()).toMatchObject({ points: [], brightness: 0 })
  })
})

describe('coil heating', () => {
  it('follows the closed form of a copper winding at constant current', () => {
    const bench = createWorkbench({ scenario: ideal(demoScenario) })
    const { ohms, kelvinPerWatt, timeConstantSeconds, ambientCelsius } = bench.bench.scenario.coils
    bench.bringUp(0, 0)
    bench.say('supply', 'CURR 2,(@3)')
    bench.wait(1)
    const start = bench.bench.model.coilCelsius
    // dT/dt = (I²R(T)θ − (T − Ta))/τ with R linear in T, α₂₀ = 3.93e-3 /K (IEC 60028): an exponential.
    const alpha = 3.93e-3
    const ohmsPerKelvin = (ohms * alpha) / (1 + alpha * (21 - 20))
    const gain = 2 ** 2 * kelvinPerWatt * ohmsPerKelvin
    const steady = ambientCelsius + (2 ** 2 * kelvinPerWatt * ohms) / (1 - gain)
    for (const seconds of [60, 600, 3000]) {
      const elapsed = bench.clock.seconds
      bench.wait(seconds)
      const since = bench.clock.seconds - 18
      const expected = steady + (start - steady) * Math.exp((-(1 - gain) * since) / timeConstantSeconds)
      expect(bench.bench.model.coilCelsius).toBeCloseTo(expected, 2)
      expect(bench.clock.seconds).toBeGreaterThan(elapsed)
    }
    expect(bench.bench.model.coilCelsius).toBeGreaterThan(50)
  })

  it('is seen in voltage over current of the supply to half a degree', () => {
    const bench = createWorkbench()
    bench.bringUp(0, 1.8)
    bench.wait(900)
    const [volts = 0, amps = 0] = bench.measure('supply', 'MEAS:VOLT? (@3);CURR? (@3)')
    const { ohms, celsius } = bench.bench.scenario.coils
    const seen = coilTemperatureCelsius({
      resistanceOhms: volts / amps,
      referenceOhms: ohms,
      referenceCelsius: celsius,
    })
    expect(bench.bench.model.coilCelsius).toBeGreaterThan(35)
    expect(Math.abs(seen - bench.bench.model.coilCelsius)).toBeLessThan(0.6)
  })

  it('cools towards the room with its time constant once the current is off', () => {
    const bench = createWorkbench()
    const { timeConstantSeconds, ambientCelsius } = bench.bench.scenario.coils
    bench.ask('set', { coilCelsius: 50 })
    bench.wait(timeConstantSeconds)
    expect(bench.bench.model.coilCelsius).toBeCloseTo(
      ambientCelsius + (50 - ambientCelsius) * Math.exp(-1),
      1,
    )
  })
})
