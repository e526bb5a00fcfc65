import type { CoilPair } from '#app/physics/coil-field.ts'
import type { EdgeSpread } from './edge-spread.ts'
import type { Gun } from './evenness-table.ts'

/** A scale with divisions, on which both edges of the beam are read. */
export type Ruler = {
  kind: 'mirror' | 'ruler-behind'
  graduationMetres: number
  /** part of a graduation that is read, 0.5 for half a division */
  readableFraction: number
  distanceBehindMetres: number
  uDistanceBehindMetres: number
  eyeDistanceMetres: number
}

/** A rung stands where the beam meets it: there is no parallax and nothing to read. */
type Rungs = { kind: 'rungs' }

/** Measured centre field an ampere through each coil. It takes the place of the geometry in the budget. */
export type FieldFactor = { teslaPerAmp: number; standardUncertainty: number }

/** x runs along the scale; gun and scale lie in the mid-plane. */
type Pair = {
  readonly coilPair: CoilPair
  readonly gun: Gun
  /** standard uncertainties, the same error in both coils */
  readonly uTurns?: number
  readonly uRadiusMetres?: number
  readonly uSeparationMetres?: number
  readonly fieldFactor?: FieldFactor
}

/** A factor alone: then nothing is known of the field's evenness, and it is taken to be even. */
type FactorAlone = { readonly coilPair: null; readonly fieldFactor: FieldFactor }

type Common = {
  /** series: the measured current goes through each coil; parallel: half of it does */
  readonly coilConnection: 'series' | 'parallel'
  /** half-width of the bounds on the radius within which the edge of the glow was taken */
  readonly beam: { halfWidthMetres: number }
  readonly anodeMeter: {
    percentOfReading: number
    digits: number
    digitSizeVolts: number
    /** added to the reading, from a verification */
    correctionVolts?: number
    uCorrectionVolts?: number
  }
  readonly coilMeter: { percentOfReading: number; digits: number; digitSizeAmps: number }
}

/** What of a bench the budget of a reading needs. */
export type BudgetBench = (Pair | FactorAlone) & Common & { readonly scale: Ruler | Rungs }

/** A bench with its coil pair and with a scale whose divisions are read. */
export type ReadingBench = Pair & Common & { readonly scale: Ruler }

/**
 * A diameter that nobody read off a scale. `rung`: of the rung that the beam was made to meet, with how far the current
 * could be moved to either side before it no longer met it. `stated`: by others, as it stands on the scale.
 */
export type GivenDiameter = { diameterMetres: number; uDiameterMetres: number } & (
  | { source: 'rung'; settingHalfWidthAmps: number }
  | { source: 'stated' }
)

/** A diameter off a photo, as it stands on the scale: parallax is not yet taken out. */
export type PhotoDiameter = {
  diameterMetres: number
  uCircleMetres: number
  circleDegreesOfFreedom: number
  /** with the product of both relative uncertainties */
  uScaleMetres: number
  scaleDegreesOfFreedom: number
}

export type Reading = {
  voltageVolts: number
  /** standard error of the window's mean (type A), with its degrees of freedom if known */
  uVoltageVolts: number
  voltageDegreesOfFreedom?: number
  /** size of the last digit as it was written down, in place of the meter's */
  voltageDigitVolts?: number
  /** as measured, before it divides between coils in parallel; negative when the sense is reversed */
  currentAmps: number
  uCurrentAmps: number
  currentDegreesOfFreedom?: number
  currentDigitAmps?: number
  /** one entry a person or repeat, the same of both in the same place */
  leftEdges: readonly number[]
  rightEdges: readonly number[]
  /** of those who measured off a photo and count with it instead of with edges */
  photos?: readonly PhotoDiameter[]
  /** in place of edges and photos */
  given?: GivenDiameter | undefined
  /** pooled over the run; left out, it is that of these edges alone */
  edgeSpread?: EdgeSpread | null
}
