import type { Units } from './cell.ts'

/** What a column can hold. A length that is uncertain is the diameter, the radius or each edge, whichever the file has. */
export const roles = [
  'voltage',
  'current',
  'diameter',
  'radius',
  'left',
  'right',
  'rung',
  'halfWidth',
  'uVoltage',
  'uCurrent',
  'uLength',
] as const
export type Role = (typeof roles)[number]

export const roleWords: Record<Role, string> = {
  voltage: 'anode voltage',
  current: 'coil current',
  diameter: 'diameter',
  radius: 'radius',
  left: 'left edge',
  right: 'right edge',
  rung: 'rung',
  halfWidth: 'current moved at the rung, ±',
  uVoltage: 'uncertainty of the voltage',
  uCurrent: 'uncertainty of the current',
  uLength: 'uncertainty of the length',
}

const volts: Units = { V: 0, kV: 3 }
const amperes: Units = { A: 0, mA: -3 }
const metres: Units = { mm: -3, cm: -2, m: 0 }

export const unitsOf: Record<Role, Units> = {
  voltage: volts,
  uVoltage: volts,
  current: amperes,
  uCurrent: amperes,
  halfWidth: amperes,
  diameter: metres,
  radius: metres,
  left: metres,
  right: metres,
  rung: metres,
  uLength: metres,
}

/** How the uncertainties of a file are stated, and what makes a standard uncertainty of each (JCGM 100:2008, 4.3.3, 4.3.7). */
export const statements = {
  standard: { words: 'standard uncertainties', divisor: 1 },
  bounds: { words: 'bounds, ± as much as it can be off', divisor: Math.sqrt(3) },
  expanded: { words: 'expanded uncertainties, k = 2', divisor: 2 },
} as const
export type StatedAs = keyof typeof statements

export type ColumnMapping = { role: Role; unit: string }

/** How a file was read, as it is kept with the run. */
export type ImportMapping = {
  delimiter: string
  decimal: '.' | ','
  headingRow: number
  columns: (ColumnMapping & { index: number; heading: string })[]
  /** One for all rows, as it was typed, in the unit of its column. */
  forAll: { voltage: string; current: string; length: string }
  statedAs: StatedAs
  /** Lengths as they stand on the bench's scale, its parallax not yet taken out. */
  isOnScale: boolean
}
