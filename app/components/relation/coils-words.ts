import type { RelationView } from '#app/runs/relation-view.ts'
import { fixed, thinSpace } from '../figures.ts'

/** Separation over radius that a formula for equal ones bears: a tenth of a per cent of it shows in e/m as about as much. */
const tolerance = 0.001

const centimetres = (metres: number) => `${fixed(metres * 100, 2)}${thinSpace}cm`

/** That a relation is for coils as far apart as their radius, and whether those of this bench are. */
export function coilsWords({ radiusMetres, separationMetres }: RelationView['coils']): string {
  const takes = 'It takes the coils to be as far apart as their radius'
  if (Math.abs(separationMetres / radiusMetres - 1) <= tolerance) return `${takes}, as they are here.`
  return `${takes}. Here they have a radius of ${centimetres(radiusMetres)} and are ${centimetres(separationMetres)} apart.`
}
