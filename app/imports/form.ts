import * as z from 'zod'
import { unitInCells } from './cell.ts'
import { largestColumns } from './limits.ts'
import { type ColumnMapping, type Role, roles, type StatedAs, unitsOf } from './mapping.ts'

/** In place of a bench's id: the run states a field factor of its own. */
export const ownField = 'own'

/** What a person has chosen so far, as the form holds it. */
export type ImportChoice = {
  /** The id of a bench, `ownField`, or nothing yet. */
  bench: string
  teslaPerAmp: string
  uTeslaPerAmp: string
  delimiter: 'auto' | 'tab' | 'semicolon' | 'comma'
  decimal: 'auto' | '.' | ','
  headingRow: 'auto' | number
  forAll: { voltage: string; current: string; length: string }
  statedAs: StatedAs
  isOnScale: boolean
  /** Of which table the columns are: where that has changed they are guessed anew. */
  seen: string
  columns: (ColumnMapping | null)[]
}

const short = z.string().max(60).catch('')
const choiceSchema = z.object({
  bench: short,
  teslaPerAmp: short,
  uTeslaPerAmp: short,
  delimiter: z.enum(['auto', 'tab', 'semicolon', 'comma']).catch('auto'),
  decimal: z.enum(['auto', '.', ',']).catch('auto'),
  headingRow: z
    .string()
    .regex(/^\d{1,2}$/)
    .transform(Number)
    .or(z.literal('auto'))
    .catch('auto'),
  allVoltage: short,
  allCurrent: short,
  allLength: short,
  statedAs: z.enum(['standard', 'bounds', 'expanded']).catch('standard'),
  reads: z.enum(['scale', 'beam']).catch('scale'),
  seen: short,
})

/** The choices of a form, with what no page sends taken for not chosen. */
export function readChoice(form: FormData): ImportChoice {
  const { allVoltage, allCurrent, allLength, reads, ...rest } = choiceSchema.parse(
    Object.fromEntries([...form].filter(([, value]) => typeof value === 'string')),
  )
  const units = form.getAll('unit')
  return {
    ...rest,
    forAll: { voltage: allVoltage, current: allCurrent, length: allLength },
    isOnScale: reads === 'scale',
    columns: form
      .getAll('role')
      .slice(0, largestColumns)
      .map((role, i) => readColumn(role, units[i])),
  }
}

function readColumn(role: unknown, unit: unknown): ColumnMapping | null {
  const known = roles.find((it): it is Role => it === role)
  if (!known) return null
  const isUnit = typeof unit === 'string' && (unit === unitInCells || Object.hasOwn(unitsOf[known], unit))
  return { role: known, unit: isUnit ? unit : '' }
}
