import { ampere, type Dimension, dimensionless, metre, permeability, volt } from './dimension.ts'

/** What a symbol of a formula may stand for: what is set or read at a bench, and what is known of its coils. */
export const quantities = [
  'anodeVoltage',
  'coilCurrent',
  'beamDiameter',
  'beamRadius',
  'turns',
  'coilRadius',
  'coilSeparation',
  'magneticConstant',
] as const
export type Quantity = (typeof quantities)[number]

export const quantityWords: Record<Quantity, { name: string; unit: string; dimension: Dimension }> = {
  anodeVoltage: { name: 'anode voltage', unit: 'V', dimension: volt },
  coilCurrent: { name: 'current through each coil', unit: 'A', dimension: ampere },
  beamDiameter: { name: 'diameter of the beam’s circle', unit: 'm', dimension: metre },
  beamRadius: { name: 'radius of the beam’s circle', unit: 'm', dimension: metre },
  turns: { name: 'number of turns of each coil', unit: '1', dimension: dimensionless },
  coilRadius: { name: 'radius of the coils', unit: 'm', dimension: metre },
  coilSeparation: { name: 'separation of the coils', unit: 'm', dimension: metre },
  magneticConstant: { name: 'magnetic constant', unit: 'N/A²', dimension: permeability },
}

/** Values of all of them, in SI units. */
export type Values = Readonly<Record<Quantity, number>>

/** The symbol that a person uses for each; one that their formula does not need has none. */
export type Symbols = Partial<Record<Quantity, string>>
