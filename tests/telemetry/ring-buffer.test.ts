import { describe, expect, it } from 'vitest'
import type { Samples } from '#app/protocol/messages.ts'
import { RingBuffer, type Trace } from '#app/telemetry/ring-buffer.ts'

function batch(first: number, times: number[], volts: (number | null)[]): Samples {
  return { type: 'samples', benchId: 'bench-1', first, times, values: { anodeVolts: volts } }
}

function read(ring: RingBuffer, end: number, span: number): Trace {
  const trace: Trace = { seconds: [], values: [] }
  ring.read('anodeVolts', end, span, trace)
  return trace
}

describe('RingBuffer', () => {
  it('hands out the samples of the span asked for, counted from its end', () => {
    const ring = new RingBuffer(10)
    ring.add(batch(0, [1, 2, 3, 4], [10, 20, 30, 40]), 1000)
    expect(read(ring, 1004, 2)).toEqual({ seconds: [-2, -1, 0], values: [20, 30, 40] })
  })

  it('keeps the newest when it is full', () => {
    const ring = new RingBuffer(3)
    ring.add(batch(0, [1, 2, 3, 4, 5], [1, 2, 3, 4, 5]), 0)
    expect(ring.count).toBe(3)
    expect(read(ring, 5, 60).values).toEqual([3, 4, 5])
  })

  it('passes over samples that a snapshot repeats after a reconnection', () => {
    const ring = new RingBuffer(10)
    ring.add(batch(0, [1, 2, 3], [1, 2, 3]), 0)
    ring.add(batch(1, [2, 3, 4], [2, 3, 4]), 0)
    expect(read(ring, 4, 60).values).toEqual([1, 2, 3, 4])
  })

  it('puts a gap where numbered samples are missing, never a line across it', () => {
    const ring = new RingBuffer(10)
    ring.add(batch(0, [1, 2], [1, 2]), 0)
    ring.add(batch(7, [8, 9], [8, 9]), 0)
    expect(read(ring, 9, 60).values).toEqual([1, 2, null, 8, 9])
  })

  it('keeps a moment without a reading as a gap, not as zero', () => {
    const ring = new RingBuffer(10)
    ring.add(batch(0, [1, 2, 3], [1, null, 3]), 0)
    expect(read(ring, 3, 60).values).toEqual([1, null, 3])
    expect(ring.latest('coilAmps')).toEqual({ value: null, seconds: 3 })
  })

  it('goes on in time when a restarted bridge numbers from zero again', () => {
    const ring = new RingBuffer(10)
    ring.add(batch(500, [50, 51], [1, 2]), 1000)
    ring.add(batch(0, [0.5, 1.5], [3, 4]), 1060)
    expect(read(ring, 1062, 60).values).toEqual([1, 2, null, 3, 4])
  })

  it('is empty before the first sample', () => {
    const ring = new RingBuffer(10)
    expect(ring.latest('anodeVolts')).toBeNull()
    expect(ring.newestSeconds).toBeNull()
    expect(read(ring, 10, 60)).toEqual({ seconds: [], values: [] })
  })
})
