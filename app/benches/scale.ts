import { data } from 'react-router'
import type { CommissionedBench, RulerScale } from '#app/protocol/bench-config.ts'

type Scaled = Pick<CommissionedBench, 'scale'>

/** How far the rung of that name is from the gun's opening; null where the scale of this bench has none of that name. */
export function findRung(
  { scale }: Scaled,
  name: string,
): { distanceMetres: number; uDistanceMetres: number } | null {
  if (scale.kind !== 'rungs') return null
  const rung = scale.rungs.find((it) => it.name === name)
  return rung ? { distanceMetres: rung.distanceMetres, uDistanceMetres: scale.uDistanceMetres } : null
}

/** The scale of a bench whose divisions are read. Throws a 404 where it has rungs, which leave nothing to measure. */
export function requireRuler({ scale }: Scaled): RulerScale {
  if (scale.kind === 'rungs')
    throw data('This bench is read at its rungs: a photo of it is not measured.', { status: 404 })
  return scale
}

/** What there is to do once voltage and current of a reading are stored, while the beam stands. */
export const nextWords = ({ scale }: Scaled): string =>
  scale.kind === 'rungs' ? 'Now choose the rung that the beam meets.' : 'Now read both edges.'
