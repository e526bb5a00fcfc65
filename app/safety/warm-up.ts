import type { BenchLimits, ChannelValues } from './types.ts'
import { heaterInBand, staleSeconds } from './view.ts'

/** Out of its band for less than this, the heater keeps what it has of its warm-up. */
export const heaterGraceSeconds = 2

export type WarmUp = {
  elapsedSeconds: number
  /** Whether the heater has been in band since it was switched on. */
  seenInBand: boolean
  outSince: number | null
  lastAt: number | null
}

export const coldHeater: WarmUp = { elapsedSeconds: 0, seenInBand: false, outSince: null, lastAt: null }

/**
 * The warm-up after one more sample. Counts while the heater is on and in band, stands still for an excursion
 * shorter than `heaterGraceSeconds`, starts again after a longer one, and is nothing while the heater is off. Time in
 * which nothing was sampled counts for no more than a sample stays fresh.
 */
export function stepWarmUp(
  warmUp: WarmUp,
  sample: { at: number; on: boolean; values: ChannelValues; limits: BenchLimits },
): WarmUp {
  if (!sample.on) return coldHeater
  if (warmUp.lastAt !== null && sample.at <= warmUp.lastAt) return warmUp
  const inBand = heaterInBand(sample.values, sample.limits.heaterVolts) === true
  if (!inBand) {
    const outSince = warmUp.outSince ?? sample.at
    const restart = sample.at - outSince >= heaterGraceSeconds
    return {
      ...warmUp,
      elapsedSeconds: restart ? 0 : warmUp.elapsedSeconds,
      outSince,
      lastAt: sample.at,
    }
  }
  const elapsed = warmUp.lastAt === null ? 0 : Math.min(sample.at - warmUp.lastAt, staleSeconds)
  const counted = warmUp.outSince === null ? elapsed : 0
  return {
    elapsedSeconds: warmUp.elapsedSeconds + counted,
    seenInBand: true,
    outSince: null,
    lastAt: sample.at,
  }
}

export const isWarm = (warmUp: WarmUp, limits: BenchLimits): boolean =>
  warmUp.lastAt !== null && warmUp.seenInBand && warmUp.elapsedSeconds >= limits.warmUpSeconds
