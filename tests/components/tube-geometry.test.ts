import { describe, expect, it } from 'vitest'
import { pathOf, scaleMarks, tubeGeometry } from '#app/components/bench/tube-geometry.ts'
import { demoBenches, demoTypedBench } from '#app/db/demo-benches.ts'

function bench(benchId: string) {
  const config = demoBenches.find((it) => it.benchId === benchId)
  if (!config) throw new Error(`No ${benchId}`)
  return config
}

describe('the scale of the tube', () => {
  it('has a mark at every graduation, at its place in millimetres', () => {
    const marks = scaleMarks(bench('bench-1'))
    expect(marks).toHaveLength(121)
    for (const [i, { x }] of marks.entries()) expect(x).toBeCloseTo(-60 + i, 9)
  })

  it('numbers the whole centimetres from its zero mark', () => {
    const numbered = scaleMarks(bench('bench-1')).filter(({ label }) => label !== null)
    expect(numbered.map(({ label }) => label)).toEqual(Array.from({ length: 13 }, (_, i) => String(i)))
    expect(numbered.map(({ x }) => Math.round(x))).toEqual(Array.from({ length: 13 }, (_, i) => -60 + 10 * i))
  })

  it('shows bulb and gun larger on a ruler behind them, by L/(L − δ)', () => {
    const { bulbRadius } = tubeGeometry(bench('bench-2'))
    expect(bulbRadius).toBeCloseTo((85 * 600) / (600 - 80), 9)
    expect(tubeGeometry(bench('bench-1')).bulbRadius).toBeCloseTo(80, 9)
  })

  it('has rungs where the beam meets them: to the left of a gun that points up', () => {
    const rungs = [
      { name: '6 cm', distanceMetres: 0.06 },
      { name: '8 cm', distanceMetres: 0.08 },
    ]
    const config = { ...demoTypedBench, scale: { kind: 'rungs' as const, rungs, uDistanceMetres: 0.0002 } }
    const { scale, gun, box } = tubeGeometry(config)
    expect(gun.x).toBeCloseTo(42, 9)
    expect(scale.marks.map(({ x, label }) => [Math.round(x), label])).toEqual([
      [-18, '6 cm'],
      [-38, '8 cm'],
    ])
    expect([scale.zero, scale.zero + scale.length].map(Math.round)).toEqual([-38, 42])
    expect(box.top + box.height).toBeGreaterThan(-scale.y)
  })

  it('holds bulb and scale', () => {
    for (const config of demoBenches) {
      const { box, bulbRadius, scale } = tubeGeometry(config)
      expect(box.left).toBeLessThan(Math.min(-bulbRadius, scale.zero))
      expect(box.left + box.width).toBeGreaterThan(Math.max(bulbRadius, scale.zero + scale.length))
      expect(box.top + box.height).toBeGreaterThan(-scale.y)
    }
  })
})

describe('a path', () => {
  it('turns y over, since an SVG counts it downward', () => {
    expect(
      pathOf([
        [1, 2],
        [3, -4],
      ]),
    ).toBe('M1 -2L3 4')
  })
})
