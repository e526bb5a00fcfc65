/** A constant with its standard uncertainty in the same unit (0 for a defined value). */
export type PhysicalConstant = {
  readonly name: string
  readonly value: number
  readonly standardUncertainty: number
  readonly unit: string
  readonly year: number
  readonly source: string
}

const CODATA_2022 = 'CODATA recommended values 2022, Rev. Mod. Phys. 97, 025002 (2025)'

/** Measured, no longer 4π × 10⁻⁷ exactly since the revision of the SI in 2019. */
export const vacuumPermeability: PhysicalConstant = {
  name: 'vacuum magnetic permeability',
  value: 1.25663706127e-6,
  standardUncertainty: 2.0e-16,
  unit: 'N A⁻²',
  year: 2022,
  source: CODATA_2022,
}

export const speedOfLight: PhysicalConstant = {
  name: 'speed of light in vacuum',
  value: 299_792_458,
  standardUncertainty: 0,
  unit: 'm s⁻¹',
  year: 2022,
  source: CODATA_2022,
}

export const elementaryCharge: PhysicalConstant = {
  name: 'elementary charge',
  value: 1.602176634e-19,
  standardUncertainty: 0,
  unit: 'C',
  year: 2022,
  source: CODATA_2022,
}
