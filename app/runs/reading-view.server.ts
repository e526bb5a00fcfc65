import type { Database } from '../db/client.server.ts'
import {
  standardUncertaintyFromAccuracy,
  standardUncertaintyFromResolution,
} from '../metrology/instrument-accuracy.ts'
import type { BenchConfig } from '../protocol/bench-config.ts'
import { workOut } from './reading-result.server.ts'
import type { Reads } from './reads.server.ts'
import { loadReadings } from './run-readings.server.ts'

export type ReadingView = {
  id: string
  number: number
  capturedAt: string
  by: string
  revision: number
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
  /** Null until someone has entered edges or measured a photo, and where the numbers give no orbit. */
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

type Accuracy = BenchConfig['instruments']['anodeMeter']['accuracy']

/** Scatter of the window, the meter's accuracy and the size of its last digit, as one standard uncertainty. */
function combined(reading: number, standardError: number, accuracy: Accuracy): number {
  return Math.hypot(
    standardError,
    standardUncertaintyFromAccuracy({ reading, ...accuracy }),
    standardUncertaintyFromResolution(accuracy.digitSize),
  )
}

/** The readings of a run by number, each worked out with the bench as it was when the reading was taken. */
export async function listReadings(db: Database, { runId }: { runId: string }): Promise<ReadingView[]> {
  const rows = await loadReadings(db, runId)
  return rows.map(({ reading, by, struck, ...entries }) => {
    const { anodeMeter, coilMeter } = entries.config.instruments
    return {
      id: reading.id,
      number: reading.number,
      capturedAt: reading.capturedAt.toISOString(),
      by,
      revision: reading.revision,
      polarity: reading.polarity === -1 ? -1 : 1,
      anodeVolts: reading.anodeVolts,
      uAnodeVolts: combined(reading.anodeVolts, reading.uAnodeVolts, anodeMeter.accuracy),
      coilAmps: reading.coilAmps,
      uCoilAmps: combined(reading.coilAmps, reading.uCoilAmps, coilMeter.accuracy),
      anodeStandardErrorVolts: reading.uAnodeVolts,
      coilStandardErrorAmps: reading.uCoilAmps,
      edges: entries.edges,
      photos: entries.photos,
      result: workOut(reading, entries),
      struck,
    }
  })
}
