import type { PlannedSetting } from './plan.server.ts'

export type PlannerCell = {
  coilAmps: number
  diameterMetres: number
  /** Why it cannot be set or read, or null. */
  refused: 'limit' | 'glass' | 'faint' | null
  /** How often the choice takes it. */
  times: number
}

/** What the planner of a bench shows. */
export type PlannerView = {
  bench: { id: string; name: string; place: string; hasPorts: boolean }
  /** The open run that a plan goes into. */
  runId: string | null
  planned: PlannedSetting[]
  count: number
  criterion: 'all' | 'charge-to-mass'
  /** What e/m the orbits are predicted with; null where none may be used yet. */
  valueFrom: 'accepted' | 'run' | null
  /** A table of voltages downwards and currents across for each polarity. */
  map: { polarity: 1 | -1; amps: number[]; rows: { anodeVolts: number; cells: PlannerCell[] }[] }[] | null
  chosen: {
    anodeVolts: number
    coilAmps: number
    polarity: 1 | -1
    times: number
    radiusMetres: number
    uRadiusMetres: number
    evenness: number
    relativeUncertainty: number
  }[]
  outlook: {
    relativeUncertainty: number
    effects: { name: string; unit: string; standardUncertainty: number; told: number }[]
  } | null
}
