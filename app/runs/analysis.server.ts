import { type Diagnosis, diagnose } from '../analysis/diagnosis.ts'
import { diagnosisWords } from '../analysis/diagnosis-words.ts'
import type { BudgetBench, Reading, ReadingResult } from '../analysis/reading.ts'
import { commonParts, seriesReading } from '../analysis/series-input.ts'
import type { SeriesField, SeriesReading } from '../analysis/series-model.ts'
import { may } from '../auth/capabilities.ts'
import { requireVisibleBench, toFramed, type Watcher } from '../benches/visible-benches.server.ts'
import type { Database } from '../db/client.server.ts'
import {
  budgetRows,
  effectRows,
  fitRows,
  meanOf,
  seriesRow,
  statedResult,
  subsetRows,
} from './analysis-rows.server.ts'
import type { AnalysisView } from './analysis-view.ts'
import { compareToAccepted } from './comparison.server.ts'
import type { LineKind, Method } from './fits.ts'
import { furtherSettings } from './further-settings.server.ts'
import { linePlot } from './line-plot.server.ts'
import { listPlanned, type PlannedSetting } from './plan.server.ts'
import { budgetOf } from './reading-result.server.ts'
import { loadReadings, type StoredReading } from './run-readings.server.ts'
import { seriesField } from './series-field.server.ts'
import { findStatedFit } from './statement.server.ts'
import { requireVisibleRun } from './visible-run.server.ts'

/** A reading that takes part in the series. */
export type Entry = {
  stored: StoredReading
  reading: Reading & { bench: BudgetBench }
  result: ReadingResult
  point: SeriesReading
}

/** The readings of one bench revision that are not struck and have been read, and why each other is left out. */
export type Series = {
  entries: Entry[]
  leftOut: Map<string, string>
  bench: BudgetBench | null
  field: SeriesField | null
}

/** What the analysis page of a run shows. Throws a 404 for a run that this person may not read. */
export async function loadAnalysis(
  db: Database,
  { runId, person, line, method }: { runId: string; person: Watcher; line: LineKind; method: Method },
): Promise<AnalysisView> {
  const run = await requireVisibleRun(db, { runId, person })
  const [stored, planned, statedFit, bench] = await Promise.all([
    loadReadings(db, runId),
    listPlanned(db, runId),
    findStatedFit(db, runId),
    run.bench && requireVisibleBench(db, { benchId: run.bench.id, person }),
  ])
  const series = seriesOf(stored)
  const { entries, leftOut, field } = series
  const points = entries.map(({ point }) => point)
  const parts = commonParts(entries.map(({ result }) => result))
  const commonRelative = Math.hypot(...parts.map(({ relative }) => relative))
  const diagnosis = field && entries.length > 0 ? diagnose({ readings: points, field, commonRelative }) : null
  const fits = field ? fitRows(points, field) : []
  const stated =
    diagnosis && statedResult(statedFit, { diagnosis, fits, commonRelative, count: points.length })
  const mean = meanOf(entries.map(({ result }) => result.value))
  const numbers = entries.map((entry) => entry.stored.reading.number)
  return {
    run: {
      id: run.id,
      startedAt: run.startedAt.toISOString(),
      by: run.by,
      bench: bench && toFramed(bench),
      fileName: run.fileName,
    },
    isRealBench: !bench?.config.picturePath,
    rows: stored.map((row) => seriesRow(row, { entries, leftOut, diagnosis })),
    mean,
    reductions: reductionsOf(series, stored.length),
    stated,
    fits,
    plot: field && linePlot({ points, numbers, field, line, method, outliers: diagnosis?.outliers ?? [] }),
    diagnosis: diagnosis && {
      ...diagnosisWords(diagnosis, numbers),
      effects: effectRows(diagnosis),
      subsets: subsetRows(diagnosis),
      further:
        field && bench && needsMore(diagnosis)
          ? furtherSettings({ entries, field, config: bench.config, diagnosis })
          : [],
    },
    budget: diagnosis ? budgetRows(entries, parts, diagnosis) : [],
    monteCarlo: monteCarloOf(series),
    plan: planned.map((setting) => ({ ...setting, isRead: stored.some((row) => isAt(row, setting)) })),
    comparison: may(person.role, 'see-accepted-value') ? compareToAccepted(stated, mean) : null,
  }
}

function seriesOf(stored: readonly StoredReading[]): Series {
  const leftOut = new Map<string, string>()
  const standing = stored.filter((row) => {
    if (row.struck) leftOut.set(row.reading.id, `struck: ${row.struck.reason}`)
    return !row.struck
  })
  const revisionOf = ({ reading }: StoredReading) => reading.revision ?? 0
  const revision = Math.max(...standing.map(revisionOf))
  const entries: Entry[] = []
  for (const row of standing) {
    if (revisionOf(row) !== revision) {
      leftOut.set(row.reading.id, `taken under revision ${row.reading.revision} of the bench: another series`)
      continue
    }
    const budget = budgetOf(row.reading, row)
    if (budget) entries.push({ stored: row, ...budget, point: seriesReading(budget.reading, budget.result) })
    else leftOut.set(row.reading.id, 'its beam has not been read, or the numbers give no orbit')
  }
  const bench = entries[0]?.reading.bench ?? null
  return { entries, leftOut, bench, field: bench && seriesField(bench) }
}

function reductionsOf({ entries, leftOut }: Series, count: number): string[] {
  if (count === 0) return ['There are no readings in this run yet.']
  if (entries.length === 0)
    return [`None of the ${count} readings can be used: ${[...new Set(leftOut.values())].join('; ')}.`]
  const few =
    entries.length < 3
      ? [
          'With fewer than three readings there are no lines to compare: the stated uncertainty rests on what is known of the bench.',
        ]
      : []
  const left =
    leftOut.size === 0
      ? []
      : [`${leftOut.size} of the ${count} readings take no part; the reason stands beside each.`]
  return [...few, ...left]
}

const needsMore = ({ finding, notApart }: Diagnosis): boolean =>
  finding.kind === 'ambiguous' || (finding.kind !== 'unexplained' && notApart.length > 0)

/** Propagation goes over one bench. */
function monteCarloOf({ entries, bench }: Series): AnalysisView['monteCarlo'] {
  if (!bench) return null
  return {
    kind: 'series',
    bench,
    readings: entries.map(({ reading: { bench: _, ...reading } }) => reading),
  }
}

function isAt(
  { reading, struck }: StoredReading,
  { anodeVolts, coilAmps, polarity }: PlannedSetting,
): boolean {
  return (
    !struck &&
    Math.abs(reading.anodeVolts - anodeVolts) < 3 &&
    Math.abs(Math.abs(reading.coilAmps) - coilAmps) < 0.02 &&
    (reading.polarity === -1 ? -1 : 1) === polarity
  )
}
