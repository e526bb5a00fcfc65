import { vacuumPermeability } from '../physics/constants.ts'
import type { WorkedRelation } from '../relation/work-out.ts'
import type { ReadingView } from './reading-view.server.ts'
import type { OwnValue, RelationView } from './relation-view.ts'

/**
 * What a person's own relation makes of each reading that is not struck and whose beam was read, with the bench's coils and
 * the diameter of the logbook. Nothing is corrected for what the relation leaves out.
 */
export function ownValues(
  readings: readonly ReadingView[],
  {
    relation,
    coils,
    connection,
  }: { relation: WorkedRelation; coils: RelationView['coils']; connection: 'series' | 'parallel' },
): OwnValue[] {
  return readings.flatMap(({ struck, result, rung, number, polarity, anodeVolts, coilAmps }) => {
    const diameterMetres = result?.diameterMetres ?? rung?.diameterMetres
    if (struck || !diameterMetres) return []
    const perCoil = Math.abs(coilAmps) * (connection === 'parallel' ? 0.5 : 1)
    const own = relation.valueAt({
      anodeVoltage: anodeVolts,
      coilCurrent: perCoil,
      beamDiameter: diameterMetres,
      beamRadius: diameterMetres / 2,
      turns: coils.turns,
      coilRadius: coils.radiusMetres,
      coilSeparation: coils.separationMetres,
      magneticConstant: vacuumPermeability.value,
    })
    const logbook = result && { value: result.chargeToMass, standardUncertainty: result.standardUncertainty }
    return [{ number, polarity, anodeVolts, coilAmps: perCoil, diameterMetres, own, logbook }]
  })
}
