import type { RelationCheck } from '../relation/check.ts'
import type { Quantity, Symbols } from '../relation/quantities.ts'

/** A formula that held, and which symbol stands for what. */
export type StoredRelation = { text: string; symbols: Symbols; checkedAt: string }

/** A reading with what a person's own relation makes of it; null where it gives no value. */
export type OwnValue = {
  number: number
  polarity: 1 | -1
  anodeVolts: number
  /** Through each coil. */
  coilAmps: number
  diameterMetres: number
  own: number | null
  logbook: { value: number; standardUncertainty: number } | null
}

export type RelationView = {
  bench: { id: string; name: string; place: string; hasPorts: boolean }
  /** A real bench glows by itself: no beam's colour on its page in the dark. */
  isRealBench: boolean
  coils: { turns: number; radiusMetres: number; separationMetres: number }
  /** The newest of this person that held. */
  relation: (StoredRelation & { readAs: string; isHelmholtz: boolean }) | null
  /** Of the open run's readings; null without a run. */
  values: OwnValue[] | null
}

/** What a check is answered with; what was typed comes back with it, for a page without scripts. */
export type RelationReply = {
  typed: { text: string; symbols: Partial<Record<Quantity, string>> }
  /** What is wrong with a symbol, beside its field. */
  errors: Partial<Record<Quantity, string>>
  /** Null where a symbol was wrong. */
  check: RelationCheck | null
}
