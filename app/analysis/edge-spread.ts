/** What one person tells of the beam's width on the scale: its two edges, or a diameter measured off a photo. */
type Read = { leftMetres: number; rightMetres: number } | { diameterMetres: number }

/** Standard deviation of what one person reads for the distance between the edges, and how well it is known. */
export type EdgeSpread = { standardDeviationMetres: number; degreesOfFreedom: number }

/**
 * The spread of the edges over people or repeats, pooled over the readings of a run: √(Σ(d − d̄)²/Σ(n − 1)) with the mean
 * of each reading for itself. It is taken from the differences of the two edges, since whoever takes the glow to begin
 * further out takes it so on both sides, and whoever sits aside shifts both alike. A diameter off a photo is such a
 * difference as it is.
 *
 * @param readings of a run; of each, what every person read off the scale
 * @returns null where no reading has been read by more than one person
 * @throws RangeError naming `readings` for an edge that is not finite
 *
 * Source: JCGM 100:2008, 4.2.4 (pooled estimate of variance).
 */
export function pooledEdgeSpread(readings: readonly (readonly Read[])[]): EdgeSpread | null {
  let squares = 0
  let degreesOfFreedom = 0
  readings.forEach((reads, i) => {
    let sum = 0
    for (const read of reads) sum += distanceOf(read)
    if (!Number.isFinite(sum)) throw new RangeError(`readings[${i}] must hold finite numbers only`)
    const mean = sum / reads.length
    for (const read of reads) squares += (distanceOf(read) - mean) ** 2
    degreesOfFreedom += Math.max(0, reads.length - 1)
  })
  if (degreesOfFreedom === 0) return null
  return { standardDeviationMetres: Math.sqrt(squares / degreesOfFreedom), degreesOfFreedom }
}

function distanceOf(read: Read): number {
  return 'diameterMetres' in read ? read.diameterMetres : read.rightMetres - read.leftMetres
}
