import { describe, expect, it } from 'vitest'
import { demoScenario } from '#bridge/simulator/scenario.ts'
import { createSimulator } from '#bridge/simulator/simulator.ts'

const seconds = 20

/** Processor time per second of three benches polled at 10 Hz with a picture at 5 Hz each. */
function processorShare(isMoving: boolean): number {
  const clock = {
    seconds: 0,
    now() {
      return this.seconds
    },
  }
  const simulator = createSimulator({ scenario: demoScenario, seed: 1, clock })
  const benches = demoScenario.benches.map(({ benchId }) => simulator.bench(benchId))
  const say = (index: number, name: 'supply' | 'anode-meter' | 'coil-meter' | 'interlock', text: string) => {
    const device = benches[index]?.instrument(name)
    device?.write(text)
    return device?.hasAnswer ? device.read() : null
  }
  benches.forEach((_, index) => {
    say(index, 'supply', 'VOLT 6.3,(@1);:VOLT 200,(@2);:CURR 2,(@3);:OUTP ON,(@1:3)')
  })
  clock.seconds += 30
  simulator.advance()
  const start = process.cpuUsage()
  let shown = 0
  for (let tick = 0; tick < seconds * 10; tick++) {
    clock.seconds += 0.1
    benches.forEach((bench, index) => {
      if (isMoving) say(index, 'supply', `VOLT ${150 + (tick % 100)},(@2)`)
      say(index, 'supply', 'MEAS:VOLT? (@1:3);CURR? (@1:3)')
      say(index, 'anode-meter', 'MEAS:VOLT?')
      say(index, 'coil-meter', 'MEAS:CURR?')
      say(index, 'interlock', 'INT:STAT? (@1,2)')
      if (tick % 2 === 0) shown += bench.picture().points.length
    })
  }
  const { user, system } = process.cpuUsage(start)
  expect(shown).toBeGreaterThan(seconds * 5 * 3 * 100)
  return (user + system) / 1e6 / seconds
}

describe('what the simulator costs', () => {
  it('takes a small part of one core with three benches at rest', () => {
    const share = processorShare(false)
    expect(share).toBeLessThan(0.05)
  })

  it('takes less than half of one core while all three are being moved all the time', () => {
    const share = processorShare(true)
    expect(share).toBeLessThan(0.5)
  })
})
