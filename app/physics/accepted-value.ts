import type { PhysicalConstant } from './constants.ts'

/**
 * Magnitude of the electron charge-to-mass quotient. It stands alone because a student must not be able
 * to find it in what the browser loads: only server modules, the bridge and the simulator import it.
 */
export const acceptedChargeToMass: PhysicalConstant = {
  name: 'electron charge-to-mass quotient (magnitude)',
  value: 1.75882000838e11,
  standardUncertainty: 55,
  unit: 'C kg⁻¹',
  year: 2022,
  source: 'CODATA recommended values 2022, Rev. Mod. Phys. 97, 025002 (2025)',
}
