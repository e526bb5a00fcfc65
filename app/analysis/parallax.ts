import { requireNotNegative } from '#app/statistics/domain.ts'
import type { ReadingBench } from './reading-rows.ts'

/**
 * Width of the beam over its width on the scale: a scale behind the beam is seen larger than the beam; a mirrored scale
 * takes the parallax out.
 *
 * @throws RangeError naming the distance that is out of its bounds
 */
export function parallaxFactor({
  kind,
  distanceBehindMetres,
  eyeDistanceMetres,
}: Pick<ReadingBench['scale'], 'kind' | 'distanceBehindMetres' | 'eyeDistanceMetres'>): number {
  if (kind === 'mirror') return 1
  requireNotNegative('scale.distanceBehindMetres', distanceBehindMetres)
  if (!(eyeDistanceMetres > distanceBehindMetres && eyeDistanceMetres < Number.POSITIVE_INFINITY)) {
    throw new RangeError(
      `scale.eyeDistanceMetres must be finite and above scale.distanceBehindMetres, got ${eyeDistanceMetres}`,
    )
  }
  return (eyeDistanceMetres - distanceBehindMetres) / eyeDistanceMetres
}
