import { accuracyOf } from '../benches/reading-bench.ts'
import { findRung } from '../benches/scale.ts'
import type { Database } from '../db/client.server.ts'
import {
  standardUncertaintyFromAccuracy,
  standardUncertaintyFromResolution,
} from '../metrology/instrument-accuracy.ts'
import { workOut } from './reading-result.server.ts'
import type { Reads } from './reads.server.ts'
import { loadReadings, type StoredReading } from './run-readings.server.ts'

export type ReadingView = {
  id: string
  number: number
  capturedAt: string
  by: string
  /** Null where the run was imported with a field of its own. */
  revision: number | null
  /** Measured by the bridge, typed by a person who read the meters, or imported from a file. */
  source: 'measured' | 'typed' | 'imported'
  polarity: 1 | -1
  anodeVolts: number
  /** Standard uncertainty of this value: scatter, resolution and accuracy of the meter together. */
  uAnodeVolts: number
  coilAmps: number
  uCoilAmps: number
  anodeStandardErrorVolts: number
  coilStandardErrorAmps: number
  /** The edges of those whose newest they are, in the order in which they came; the others measured off a photo last. */
  edges: Reads['edges']
  photos: Reads['photos']
  /** The rung that the beam met, on a bench that has them, and the diameter that it stands for. */
  rung: (NonNullable<Reads['rung']> & { diameterMetres: number; uDiameterMetres: number }) | null
  stated: Reads['stated']
  /** Null until someone has entered edges or a rung or measured a photo, and where the numbers give no orbit. */
  result: {
    chargeToMass: number
    standardUncertainty: number
    expandedUncertainty: number
    coverageFactor: number
    diameterMetres: number
    groups: { name: string; share: number }[]
  } | null
  struck: { reason: string; by: string; at: string } | null
}

type Accuracy = ReturnType<typeof accuracyOf>['anode']
const exact: Accuracy = { percentOfReading: 0, digits: 0, digitSize: 0 }
type Figure = { value: number; standardError: number; digit: number | null }

/** Scatter of the window, the meter's accuracy and the size of the last digit, as one standard uncertainty. */
function combined({ value, standardError, digit }: Figure, accuracy: Accuracy): number {
  return Math.hypot(
    standardError,
    standardUncertaintyFromAccuracy({ reading: value, ...accuracy }),
    standardUncertaintyFromResolution(digit ?? accuracy.digitSize),
  )
}

/** The readings of a run by number, each worked out with the bench as it was when the reading was taken. */
export async function listReadings(db: Database, { runId }: { runId: string }): Promise<ReadingView[]> {
  const rows = await loadReadings(db, runId)
  return rows.map(({ reading, by, struck, ...entries }) => {
    const { anode, coils } = accuraciesOf(entries)
    const { anodeVolts, uAnodeVolts, anodeDigitVolts, coilAmps, uCoilAmps, coilDigitAmps } = reading
    const rung = entries.rung && entries.config && findRung(entries.config, entries.rung.rung)
    return {
      id: reading.id,
      number: reading.number,
      capturedAt: reading.capturedAt.toISOString(),
      by,
      revision: reading.revision,
      source: reading.source,
      polarity: reading.polarity === -1 ? -1 : 1,
      anodeVolts,
      uAnodeVolts: combined({ value: anodeVolts, standardError: uAnodeVolts, digit: anodeDigitVolts }, anode),
      coilAmps,
      uCoilAmps: combined({ value: coilAmps, standardError: uCoilAmps, digit: coilDigitAmps }, coils),
      anodeStandardErrorVolts: uAnodeVolts,
      coilStandardErrorAmps: uCoilAmps,
      edges: entries.edges,
      photos: entries.photos,
      stated: entries.stated,
      rung:
        entries.rung && rung
          ? { ...entries.rung, diameterMetres: rung.distanceMetres, uDiameterMetres: rung.uDistanceMetres }
          : null,
      result: workOut(reading, entries),
      struck,
    }
  })
}

/** A stated uncertainty is all of it; a field of its own comes without meters of ours. */
function accuraciesOf({ config, imported }: Pick<StoredReading, 'config' | 'imported'>) {
  const { anode, coils } = config ? accuracyOf(config) : { anode: exact, coils: exact }
  return {
    anode: imported?.statesVoltage ? exact : anode,
    coils: imported?.statesCurrent ? exact : coils,
  }
}
