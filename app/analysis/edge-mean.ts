import {
  requireDegreesOfFreedom,
  requireFinite,
  requireNotNegative,
  requirePositive,
} from '#app/statistics/domain.ts'
import { type EdgeSpread, pooledEdgeSpread } from './edge-spread.ts'
import type { GivenDiameter, PhotoDiameter, Reading } from './reading-types.ts'

/** Distance between the edges on the scale: the mean of `count` people, of whom `photos` are some, and its spread. */
export type EdgeMean = {
  distance: number
  count: number
  spread: EdgeSpread | null
  photos: readonly PhotoDiameter[]
  /** Where nobody read it. */
  given: GivenDiameter | null
}

/**
 * The edges as read and the diameters measured off photos, as one mean. The spread is the run's where it is given, else
 * that of these people alone. A diameter that is given stands by itself.
 *
 * @throws RangeError naming the argument
 */
export function edgesOf({ leftEdges, rightEdges, photos = [], given, edgeSpread }: Reading): EdgeMean {
  if (given) {
    if (leftEdges.length + rightEdges.length + photos.length > 0)
      throw new RangeError('given must stand by itself, without leftEdges, rightEdges and photos')
    requirePositive('given.diameterMetres', given.diameterMetres)
    requireNotNegative('given.uDiameterMetres', given.uDiameterMetres)
    if (given.source === 'rung') requireNotNegative('given.settingHalfWidthAmps', given.settingHalfWidthAmps)
    return { distance: given.diameterMetres, count: 1, spread: null, photos, given }
  }
  const count = leftEdges.length + photos.length
  if (count === 0) throw new RangeError('leftEdges must not be empty where there are no photos')
  if (rightEdges.length !== leftEdges.length)
    throw new RangeError(
      `rightEdges must be as many as leftEdges (${leftEdges.length}), got ${rightEdges.length}`,
    )
  const pairs: { leftMetres: number; rightMetres: number }[] = []
  let sum = 0
  for (let i = 0; i < leftEdges.length; i++) {
    const leftMetres = leftEdges[i] as number
    const rightMetres = rightEdges[i] as number
    const distance = rightMetres - leftMetres
    if (!Number.isFinite(distance)) {
      requireFinite(`leftEdges[${i}]`, leftMetres)
      requireFinite(`rightEdges[${i}]`, rightMetres)
    }
    pairs.push({ leftMetres, rightMetres })
    sum += distance
  }
  photos.forEach((photo, i) => {
    requirePositive(`photos[${i}].diameterMetres`, photo.diameterMetres)
    for (const name of ['uCircleMetres', 'uScaleMetres'] as const)
      requireNotNegative(`photos[${i}].${name}`, photo[name])
    for (const name of ['circleDegreesOfFreedom', 'scaleDegreesOfFreedom'] as const)
      requireDegreesOfFreedom(`photos[${i}].${name}`, photo[name])
  })
  if (edgeSpread) {
    requireNotNegative('edgeSpread.standardDeviationMetres', edgeSpread.standardDeviationMetres)
    requireDegreesOfFreedom('edgeSpread.degreesOfFreedom', edgeSpread.degreesOfFreedom)
  }
  for (const { diameterMetres } of photos) sum += diameterMetres
  return {
    distance: sum / count,
    count,
    spread: edgeSpread ?? pooledEdgeSpread([photos.length > 0 ? [...pairs, ...photos] : pairs]),
    photos,
    given: null,
  }
}
