import { eq } from 'drizzle-orm'
import { parallaxFactor } from '#app/analysis/parallax.ts'
import { readingBench } from '#app/benches/reading-bench.ts'
import type { Database } from '#app/db/client.server.ts'
import { demoBenches } from '#app/db/demo-benches.ts'
import { edges, readings } from '#app/db/schema.ts'
import { acceptedChargeToMass } from '#app/physics/accepted-value.ts'
import { storeCapture } from '#app/runs/capture.server.ts'
import { startRun } from '#app/runs/runs.server.ts'
import { seriesField } from '#app/runs/series-field.server.ts'
import { RandomNumbers } from '#app/statistics/random.ts'
import { bareCapture } from './bare-capture.ts'

type Truth = { strayFieldTesla?: number; voltageOffsetVolts?: number; scaleOffsetMetres?: number }

/**
 * A run of readings on a demo bench, stored as captures and edges are, of orbits in the bench's own field with a known stray
 * field and known offsets. Each edge is off by a quarter of a millimetre or so, by a seeded chance.
 */
export async function storeRun(
  db: Database,
  {
    benchId = 'bench-1',
    personId,
    settings,
    truth = {},
    edgeMetres = 0.25e-3,
    seed = 1,
  }: {
    benchId?: string
    personId: string
    settings: readonly { volts: number; amps: number }[]
    truth?: Truth
    edgeMetres?: number
    seed?: number
  },
): Promise<string> {
  const config = demoBenches.find((bench) => bench.benchId === benchId)
  if (!config || config.scale.kind === 'rungs') throw new Error(`The demo has no ${benchId} with a ruler`)
  const field = seriesField(readingBench(config))
  const { strayFieldTesla = 0, voltageOffsetVolts = 0, scaleOffsetMetres = 0 } = truth
  const random = new RandomNumbers(seed)
  const runId = await startRun(db, { benchId, personId })
  for (const { volts, amps } of settings) {
    let radius = 0.04
    for (let i = 0; i < 30; i++) {
      const evenness = typeof field.evenness === 'function' ? field.evenness(radius, 1) : 1
      const tesla = (field.teslaPerAmp / Math.sqrt(evenness)) * amps + strayFieldTesla
      radius = Math.sqrt((2 * (volts - voltageOffsetVolts)) / acceptedChargeToMass.value) / tesla
    }
    const statistics = (mean: number, standardError: number) => ({
      mean,
      standardDeviation: 3 * standardError,
      standardError,
      effectiveCount: 10,
      count: 50,
    })
    const number = await storeCapture(db, {
      personId,
      capture: {
        ...bareCapture,
        benchId,
        at: Date.now() / 1000,
        statistics: {
          anodeVolts: statistics(volts + 0.02 * random.normal(), 0.02),
          coilAmps: statistics(amps + 0.0001 * random.normal(), 0.0001),
        },
      },
    })
    const [reading] = (await db.select().from(readings).where(eq(readings.runId, runId))).filter(
      (row) => row.number === number,
    )
    if (!reading) throw new Error('The reading was not stored')
    const span = (2 * radius + scaleOffsetMetres) / parallaxFactor(config.scale)
    const right = 0.1 + edgeMetres * random.normal()
    await db.insert(edges).values({
      readingId: reading.id,
      personId,
      leftMetres: right - span + edgeMetres * random.normal(),
      rightMetres: right,
      enteredAt: new Date(),
    })
  }
  return runId
}

/** Voltages and currents of bench 1 whose orbits stay in its glass. */
export const spreadSettings = [
  { volts: 120, amps: 1.1 },
  { volts: 120, amps: 1.5 },
  { volts: 120, amps: 1.9 },
  { volts: 200, amps: 1.3 },
  { volts: 200, amps: 1.6 },
  { volts: 200, amps: 1.9 },
  { volts: 290, amps: 1.5 },
  { volts: 290, amps: 1.7 },
  { volts: 290, amps: 1.9 },
  { volts: 160, amps: 1.3 },
  { volts: 240, amps: 1.5 },
  { volts: 240, amps: 1.8 },
]
