import * as z from 'zod'
import { type ColumnMapping, type Role, roles, type StatedAs } from './mapping.ts'

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
  headingRow: z.coerce.number().int().min(0).max(60).catch(Number.NaN),
  allVoltage: short,
  allCurrent: short,
  allLength: short,
  statedAs: z.enum(['standard', 'bounds', 'expanded']).catch('standard'),
  reads: z.enum(['scale', 'beam']).catch('scale'),
  seen: short,
})

/** The choices of a form, with what no page sends taken for not chosen. */
export function readChoice(form: FormData): ImportChoice {
  const { allVoltage, allCurrent, allLength, reads, headingRow, ...rest } = choiceSchema.parse(
    Object.fromEntries([...form].filter(([, value]) => typeof value === 'string')),
  )
  const { headingRow: typed } = Object.fromEntries(form)
  return {
    ...rest,
    headingRow:
      typeof typed === 'string' && /^\d/.test(typed) && !Number.isNaN(headingRow) ? headingRow : 'auto',
    forAll: { voltage: allVoltage, current: allCurrent, length: allLength },
    isOnScale: reads === 'scale',
    columns: form.getAll('role').map((role, i) => readColumn(role, form.getAll('unit')[i])),
  }
}

function readColumn(role: unknown, unit: unknown): ColumnMapping | null {
  const known = roles.find((it): it is Role => it === role)
  return known ? { role: known, unit: typeof unit === 'string' ? unit : '' } : null
}
