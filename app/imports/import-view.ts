import type { ImportChoice } from './form.ts'
import type { BadRow } from './rows.ts'

export type ImportBench = {
  id: string
  name: string
  place: string
  scale: 'mirror' | 'ruler-behind' | 'rungs'
  isReversible: boolean
}

/** A value in the base unit with its standard uncertainty. */
type Known = { value: number; standardUncertainty: number }

export type PreviewRow = {
  line: number
  voltage: Known
  current: Known
  diameter: Known | null
  edges: { leftMetres: number; rightMetres: number } | null
  rung: { rung: string; settingHalfWidthAmps: number | null } | null
}

/** A file as it would be imported, before anything is stored. */
export type ImportPreview = {
  fileName: string
  bytes: number
  digest: string
  /** The file itself in base64: it goes along with the form. */
  content: string
  choice: ImportChoice
  /** Of file and choice together: what is stored is what was shown. */
  shown: string
  delimiter: 'tab' | 'semicolon' | 'comma'
  decimal: '.' | ','
  headingRow: number
  headings: string[]
  /** The first cells of each column. */
  samples: string[][]
  problems: string[]
  rows: PreviewRow[]
  goodCount: number
  bad: BadRow[]
  badCount: number
  before: { runId: string; at: string }[]
}

/** What the page of the import is answered while nothing is stored yet. */
export type ImportReply = {
  /** What is wrong with the file, beside its field. */
  fileErrors: string[]
  preview: ImportPreview | null
  /** Something was chosen or typed after what was shown last: it was not stored, and is shown now. */
  hasChanged: boolean
}
