import {
  type BudgetBench,
  type GivenDiameter,
  orbitMoved,
  pooledEdgeSpread,
  type ReadingResult,
  readingBudget,
} from '#app/analysis/reading.ts'
import type { ReadingView } from '#app/benches/bench-view.server.ts'
import type { BenchState } from '#app/protocol/messages.ts'
import { readingWithDiameter } from './logbook-rows.ts'

export type LiveReading =
  | { kind: 'none'; sentence: string }
  | { kind: 'result'; number: number; source: 'edges' | 'photo' | 'rung'; result: ReadingResult }

type Input = { readings: ReadingView[]; state: BenchState; bench: BudgetBench; revision: number }

/**
 * e/m from the voltage and current of now with the edges, the photo or the rung of the last reading that has any, as long
 * as the orbit stands where it stood then. Otherwise what to do, in one sentence.
 */
export function liveReading({ readings, state, bench, revision }: Input): LiveReading {
  const none = (sentence: string): LiveReading => ({ kind: 'none', sentence })
  const reading = readingWithDiameter(readings)
  const hasRungs = bench.scale.kind === 'rungs'
  if (!reading)
    return none(
      `Capture a reading and ${hasRungs ? 'choose the rung that its beam meets' : 'read its two edges'}; then it stands here.`,
    )
  if (state.phase !== 'live') return none('No beam: the anode is off.')
  const voltage = state.channels.anodeVolts
  const current = state.channels.coilAmps
  if (
    typeof voltage?.mean !== 'number' ||
    typeof current?.mean !== 'number' ||
    voltage.mean <= 0 ||
    current.mean === 0
  )
    return none('Waiting for the anode voltage and the coil current.')
  const again = `${hasRungs ? 'Meet a rung and capture' : 'Read the edges'} again: the orbit has moved since reading ${reading.number}.`
  if (reading.revision !== revision || reading.polarity !== state.polarity || state.polarityChanging)
    return none(again)

  const now = { voltageVolts: voltage.mean, currentAmps: Math.abs(current.mean) * state.polarity }
  const leftEdges = reading.edges.map(({ leftMetres }) => leftMetres)
  const rightEdges = reading.edges.map(({ rightMetres }) => rightMetres)
  try {
    const result = readingBudget({
      bench,
      ...now,
      // How many samples of a window are independent is told only at capture: here the scatter itself stands for it.
      uVoltageVolts: voltage.standardDeviation ?? 0,
      uCurrentAmps: current.standardDeviation ?? 0,
      leftEdges,
      rightEdges,
      photos: reading.photos,
      given: givenOf(reading),
      edgeSpread: pooledEdgeSpread(
        readings.filter(({ struck }) => !struck).map(({ edges, photos }) => [...edges, ...photos]),
      ),
    })
    const hasMoved = orbitMoved({
      before: {
        voltageVolts: reading.anodeVolts,
        currentAmps: Math.abs(reading.coilAmps) * reading.polarity,
      },
      now,
      radiusMetres: result.diameterMetres / 2,
      resolutionMetres: resolutionOf(bench),
    })
    if (hasMoved) return none(again)
    const source = reading.rung ? 'rung' : reading.edges.length > 0 ? 'edges' : 'photo'
    return { kind: 'result', number: reading.number, source, result }
  } catch (error) {
    if (!(error instanceof RangeError)) throw error
    return none(
      `${hasRungs ? 'Rung and current' : 'The edges'} of reading ${reading.number} give no orbit of this bench: read them again.`,
    )
  }
}

function givenOf({ rung }: ReadingView): GivenDiameter | undefined {
  if (!rung) return undefined
  const { diameterMetres, uDiameterMetres, settingHalfWidthAmps } = rung
  return {
    source: 'rung',
    diameterMetres,
    uDiameterMetres,
    settingHalfWidthAmps: settingHalfWidthAmps ?? 0,
  }
}

/** What of the diameter can be told: at a rung, how far the beam is told from it, which is as wide as the beam is. */
function resolutionOf({ scale, beam }: BudgetBench): number {
  return scale.kind === 'rungs' ? beam.halfWidthMetres : scale.graduationMetres * scale.readableFraction
}

/** 'The edges give 72 % of it, the coil pair 25 %.' Shares are of the variance; small ones are left out. */
export function sharesSentence(groups: readonly { name: string; share: number }[]): string {
  const large = groups.filter(({ share }) => share >= 0.05).sort((a, b) => b.share - a.share)
  const [first, ...rest] = large.map(({ name, share }) => ({ name, percent: `${Math.round(share * 100)} %` }))
  if (!first) return ''
  const verb = first.name === 'edges' ? 'give' : 'gives'
  return `The ${first.name} ${verb} ${first.percent} of its variance${rest
    .map(({ name, percent }) => `, the ${name} ${percent}`)
    .join('')}.`
}
