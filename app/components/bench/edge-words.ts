import type { CommissionedBench } from '#app/protocol/bench-config.ts'

const sides = { outer: 'outer edges', inner: 'inner edges', middle: 'centre line' } as const
const meeting = { outer: 'outer edge', inner: 'inner edge', middle: 'centre line' } as const

/** What of the beam is read, for whoever enters it: 'outer edges of the beam', or with rungs what has to meet the rung. */
export function edgeConvention({ tube, scale }: Pick<CommissionedBench, 'tube' | 'scale'>): string {
  return scale.kind === 'rungs'
    ? `${meeting[tube.edges]} of the beam on the rung`
    : `${sides[tube.edges]} of the beam`
}
