import { standardUncertaintyFromResolution } from '../metrology/instrument-accuracy.ts'
import type { ImportedRow, Stated } from './rows.ts'

/**
 * A row as it is stored: what is stated as a standard uncertainty stands as that, and where nothing is, the size of the last
 * digit; of a diameter what that digit leaves open (rectangular).
 */
export function storedValues({ voltage, current, width }: ImportedRow) {
  return {
    reading: {
      source: 'imported' as const,
      // A file tells nothing of windows.
      windowSeconds: 0,
      polarity: current.value < 0 ? -1 : 1,
      anodeVolts: voltage.value,
      uAnodeVolts: voltage.standardUncertainty ?? 0,
      anodeEffectiveCount: 1,
      anodeDigitVolts: digitOf(voltage),
      coilAmps: current.value,
      uCoilAmps: current.standardUncertainty ?? 0,
      coilEffectiveCount: 1,
      coilDigitAmps: digitOf(current),
      states: {},
    },
    rung:
      width.kind === 'rung' ? { rung: width.rung, settingHalfWidthAmps: width.settingHalfWidthAmps } : null,
    stated:
      width.kind === 'diameter'
        ? {
            diameterMetres: width.diameter.value,
            uDiameterMetres: uncertaintyOf(width.diameter),
            leftMetres: width.edges?.leftMetres ?? null,
            rightMetres: width.edges?.rightMetres ?? null,
          }
        : null,
  }
}

const digitOf = ({ standardUncertainty, lastDigit }: Stated) => (standardUncertainty === null ? lastDigit : 0)

/** As it was stated, else of the last digit. */
export const uncertaintyOf = ({ standardUncertainty, lastDigit }: Stated): number =>
  standardUncertainty ?? standardUncertaintyFromResolution(lastDigit)
