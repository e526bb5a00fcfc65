import { effectUnit, effectWords, inUnit } from '../analysis/diagnosis-words.ts'
import {
  chooseSettings,
  outlookOf,
  type Prediction,
  predictGrid,
  predictSetting,
  type Setting,
} from '../analysis/planning.ts'
import { effects } from '../analysis/series-model.ts'
import { may } from '../auth/capabilities.ts'
import { accuracyOf, readingBench } from '../benches/reading-bench.ts'
import { requireVisibleBench, type Watcher } from '../benches/visible-benches.server.ts'
import type { Database } from '../db/client.server.ts'
import { standardUncertaintyFromResolution } from '../metrology/instrument-accuracy.ts'
import { acceptedChargeToMass } from '../physics/accepted-value.ts'
import type { CommissionedBench } from '../protocol/bench-config.ts'
import { loadAnalysis } from './analysis.server.ts'
import { planLimits, settingGrid } from './further-settings.server.ts'
import { listPlanned } from './plan.server.ts'
import type { PlannerCell, PlannerView } from './planner-view.ts'
import { findOpenRun } from './runs.server.ts'
import { seriesField } from './series-field.server.ts'

/** How well a careful reader meets an edge of the beam, over what the scale shows: common practice. */
const edgeMetres = 0.4e-3
/** Part of a meter's reading that moves while a window settles: common practice. */
const scatter = 0.0005

/** What the planner of a bench shows. Throws a 404 for a bench that this person may not watch. */
export async function loadPlanner(
  db: Database,
  {
    benchId,
    person,
    count,
    criterion,
  }: { benchId: string; person: Watcher; count: number; criterion: 'all' | 'charge-to-mass' },
): Promise<PlannerView> {
  const bench = await requireVisibleBench(db, { benchId, person })
  const { config } = bench
  const run = await findOpenRun(db, benchId)
  const known = await valueFor(db, { runId: run?.id ?? null, person })
  const frame = {
    bench: { id: bench.id, name: bench.name, place: bench.place, hasPorts: config.instruments !== null },
    runId: run?.id ?? null,
    planned: run ? await listPlanned(db, run.id) : [],
    count,
    criterion,
  }
  if (!known) return { ...frame, valueFrom: null, map: null, chosen: [], outlook: null }
  const planBench = {
    field: seriesField(readingBench(config)),
    limits: planLimits(config),
    chargeToMass: known.value,
    uChargeToMass: known.standardUncertainty,
    uncertainties: uncertaintiesOf(config),
  }
  const grid = settingGrid(config)
  const candidates = predictGrid(planBench, grid)
  let chosen: Prediction[] = []
  try {
    chosen = chooseSettings(planBench, { candidates, count, criterion })
  } catch (error) {
    // None can be set and read: the map says why.
    if (!(error instanceof RangeError)) throw error
  }
  const outlook = chosen.length > 0 ? outlookOf(planBench, chosen) : null
  return {
    ...frame,
    valueFrom: known.from,
    map: mapOf(candidates, chosen, grid),
    chosen: timesEach(chosen).map(({ setting, times }) => {
      const { evenness, relativeUncertainty, radiusMetres, uRadiusMetres } = predictSetting(
        planBench,
        setting,
      )
      return { ...setting, times, radiusMetres, uRadiusMetres, evenness, relativeUncertainty }
    }),
    outlook: outlook && {
      relativeUncertainty: outlook.relativeUncertainty,
      effects: effects.map((effect) => ({
        name: effectWords[effect],
        unit: effectUnit(effect),
        standardUncertainty: inUnit(effect, outlook.effects[effect]),
        told: outlook.told[effect],
      })),
    },
  }
}

/** e/m to predict with: the accepted value for staff, the run's own for a student, who must not be told the other. */
async function valueFor(
  db: Database,
  { runId, person }: { runId: string | null; person: Watcher },
): Promise<{ value: number; standardUncertainty: number; from: 'accepted' | 'run' } | null> {
  if (may(person.role, 'see-accepted-value')) {
    const { value, standardUncertainty } = acceptedChargeToMass
    return { value, standardUncertainty, from: 'accepted' }
  }
  if (!runId) return null
  try {
    const { stated } = await loadAnalysis(db, { runId, person, line: 'origin', method: 'ordinary' })
    return stated && { value: stated.value, standardUncertainty: stated.standardUncertainty, from: 'run' }
  } catch (thrown) {
    // Another's run is not read for its value.
    if (typeof thrown === 'object' && thrown !== null && 'init' in thrown) return null
    throw thrown
  }
}

function uncertaintiesOf(config: CommissionedBench) {
  const { anode, coils } = accuracyOf(config)
  return {
    uVoltage: Math.hypot(
      standardUncertaintyFromResolution(anode.digitSize),
      scatter * config.limits.anodeVolts,
    ),
    uCurrent: Math.hypot(
      standardUncertaintyFromResolution(coils.digitSize),
      scatter * config.limits.coilAmps,
    ),
    uDiameter: Math.SQRT2 * edgeMetres,
  }
}

function mapOf(
  candidates: readonly Prediction[],
  chosen: readonly Setting[],
  { volts, amps, polarities }: ReturnType<typeof settingGrid>,
): NonNullable<PlannerView['map']> {
  return polarities.map((polarity) => ({
    polarity,
    amps,
    rows: [...volts].reverse().map((anodeVolts) => ({
      anodeVolts,
      cells: amps.map((coilAmps): PlannerCell => {
        const isHere = (setting: Setting) =>
          setting.anodeVolts === anodeVolts && setting.coilAmps === coilAmps && setting.polarity === polarity
        const found = candidates.find(isHere)
        return {
          coilAmps,
          diameterMetres: 2 * (found?.radiusMetres ?? 0),
          refused: found ? found.refused : 'limit',
          times: chosen.filter(isHere).length,
        }
      }),
    })),
  }))
}

function timesEach(chosen: readonly Prediction[]): { setting: Setting; times: number }[] {
  const counted = new Map<string, { setting: Setting; times: number }>()
  for (const { anodeVolts, coilAmps, polarity } of chosen) {
    const key = [anodeVolts, coilAmps, polarity].join()
    const entry = counted.get(key) ?? { setting: { anodeVolts, coilAmps, polarity }, times: 0 }
    entry.times++
    counted.set(key, entry)
  }
  return [...counted.values()]
}
