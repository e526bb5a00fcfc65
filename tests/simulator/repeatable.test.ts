import { describe, expect, it } from 'vitest'
import { createWorkbench } from './workbench.ts'

/** A minute on a bench, with a fault and an e-stop in it, and every byte that was answered. */
function minuteOf(seed: number, benchId: string): string {
  const bench = createWorkbench({ seed, benchId })
  const bytes: string[] = []
  bench.bringUp(180, 1.9)
  for (let tick = 0; tick < 600; tick++) {
    bench.wait(0.1)
    bytes.push(
      bench.say('supply', 'MEAS:VOLT? (@1:3);CURR? (@1:3)') ?? '',
      bench.say('anode-meter', 'MEAS:VOLT?') ?? '',
      bench.say('coil-meter', 'MEAS:CURR?') ?? '',
      bench.say('interlock', 'INT:STAT? (@1,2)') ?? '',
    )
    if (tick % 20 === 0) bytes.push(JSON.stringify(bench.bench.picture()))
    if (tick === 200) bench.fault('over-voltage', true)
    if (tick === 300) bench.ask('e-stop', { in: true })
  }
  return bytes.join('\n')
}

describe('a seeded simulator', () => {
  it.each(['bench-1', 'bench-2', 'bench-3'])('gives the same bytes again on %s', (benchId) => {
    expect(minuteOf(5, benchId)).toBe(minuteOf(5, benchId))
  })

  it('gives other bytes with another seed, and each bench its own', () => {
    expect(minuteOf(5, 'bench-1')).not.toBe(minuteOf(6, 'bench-1'))
    expect(minuteOf(5, 'bench-1')).not.toBe(minuteOf(5, 'bench-3'))
  })

  it('reaches the same state in one long step as in many short ones', () => {
    const ends = [1, 1000].map((steps) => {
      const bench = createWorkbench()
      bench.bringUp(200, 1.5)
      const start = bench.clock.seconds
      for (let step = 1; step <= steps; step++) {
        bench.clock.seconds = start + (100 * step) / steps
        bench.simulator.advance()
      }
      return bench.terminal()
    })
    expect(ends[0]).toEqual(ends[1])
  })

  it('starts again from the same draws after a power cycle', () => {
    const bench = createWorkbench()
    const run = () => {
      bench.bringUp(200, 1.5)
      return Array.from({ length: 50 }, () => bench.say('anode-meter', 'MEAS:VOLT?'))
    }
    const first = run()
    bench.wait(3)
    bench.ask('power-cycle')
    expect(run()).toEqual(first)
  })
})
