import { requireNotNegative } from '#app/statistics/domain.ts'
import type { Ruler } from './reading-types.ts'

/**
 * Width of the beam over its width on the scale: a scale behind the beam is seen larger than the beam; a mirrored scale
 * takes the parallax out, and a rung stands where the beam meets it.
 *
 * @throws RangeError naming the distance that is out of its bounds
 */
export function parallaxFactor(
  scale: Pick<Ruler, 'kind' | 'distanceBehindMetres' | 'eyeDistanceMetres'> | { kind: 'rungs' },
): number {
  if (scale.kind !== 'ruler-behind') return 1
  const { distanceBehindMetres, eyeDistanceMetres } = scale
  requireNotNegative('scale.distanceBehindMetres', distanceBehindMetres)
  if (!(eyeDistanceMetres > distanceBehindMetres && eyeDistanceMetres < Number.POSITIVE_INFINITY)) {
    throw new RangeError(
      `scale.eyeDistanceMetres must be finite and above scale.distanceBehindMetres, got ${eyeDistanceMetres}`,
    )
  }
  return (eyeDistanceMetres - distanceBehindMetres) / eyeDistanceMetres
}
