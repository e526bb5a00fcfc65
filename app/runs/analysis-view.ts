import type { Fit, LineKind, Method } from './fits.ts'
import type { MonteCarloProblem } from './monte-carlo.ts'
import type { PlannedSetting } from './plan.server.ts'

/** A value with its standard uncertainty, in SI. */
export type Estimate = { value: number; standardUncertainty: number }

export type SeriesRow = {
  id: string
  number: number
  polarity: 1 | -1
  voltage: Estimate
  current: Estimate
  diameter: Estimate | null
  chargeToMass: Estimate | null
  /** From the stated fit, in units of its uncertainty. */
  residual: number | null
  leverage: number | null
  isFlagged: boolean
  /** Why it takes no part in the fits, or null. */
  leftOut: string | null
}

export type FitRow = {
  fit: Fit
  line: LineKind
  method: Method
  chargeToMass: Estimate
  /** The other parameter of the line, where it has one: what it means, with its unit. */
  second: (Estimate & { name: string; unit: string }) | null
  chiSquared: number
  degreesOfFreedom: number
  /** Null where the scale of the residuals was estimated from them. */
  pValue: number | null
  rSquared: number
}

export type StatedResult = Estimate & {
  fit: Fit
  words: string
  expandedUncertainty: number
  coverageFactor: number
  commonUncertainty: number
  independentUncertainty: number
}

/** One effect, in its unit. */
export type EffectRow = Estimate & {
  name: string
  unit: string
  /** What it would have to be were it the only one, and how much e/m then moves; null where the readings do not say. */
  alone: (Estimate & { change: number; isPlausible: boolean }) | null
}

export type SubsetRow = {
  effects: string
  chargeToMass: Estimate
  parameters: string
  chiSquared: number
  degreesOfFreedom: number
  pValue: number | null
  aicc: number | null
}

export type FurtherSetting = Pick<PlannedSetting, 'anodeVolts' | 'coilAmps' | 'polarity'> & { why: string }

export type BudgetRow = {
  name: string
  isCommon: boolean
  /** Standard uncertainty of e/m from this line, relative to e/m. */
  relative: number
  /** Part of the variance. */
  share: number
}

/** All that the analysis page of a run shows. */
export type AnalysisView = {
  run: {
    id: string
    startedAt: string
    by: string
    /** Null where it was imported with a field of its own. */
    bench: { id: string; name: string; place: string; hasPorts: boolean } | null
    /** The file that it was imported from. */
    fileName: string | null
  }
  /** On a real bench in a dark room the tube alone may glow. */
  isRealBench: boolean
  rows: SeriesRow[]
  /** Of the readings' own values. */
  mean: { value: number; standardDeviation: number | null; count: number } | null
  /** What had to be left out or cannot be told with these readings, in sentences. */
  reductions: string[]
  stated: StatedResult | null
  fits: FitRow[]
  plot: {
    line: LineKind
    method: Method
    points: {
      key: string
      label: string
      x: number
      y: number
      ux: number
      uy: number
      /** in units of its uncertainty */
      residual: number | null
      isFlagged: boolean
    }[]
    /** the line at places ascending in x, with the bounds of its confidence band */
    curve: { x: number; y: number; low: number; high: number }[]
    x: { label: string; name: string }
    y: { label: string; name: string }
    caption: string
  } | null
  diagnosis: {
    finding: string[]
    effects: EffectRow[]
    subsets: SubsetRow[]
    notApart: string[]
    unseen: string[]
    checks: string[]
    further: FurtherSetting[]
  } | null
  budget: BudgetRow[]
  monteCarlo: MonteCarloProblem | null
  plan: (PlannedSetting & { isRead: boolean })[]
  /** For staff alone: how the stated result stands to the accepted value. */
  comparison: { sentence: string; accepted: Estimate; source: string } | null
}
