import { and, asc, eq, gt } from 'drizzle-orm'
import { type Database, type Transaction, write } from '../db/client.server.ts'
import { benchEvents, channelSummaries, spoolMarks } from '../db/schema.ts'
import type { SpoolBatch } from '../protocol/commands.ts'

type Numbered = typeof benchEvents | typeof channelSummaries

// Below the number of values that SQLite binds in one statement.
const rowsAStatement = 500

/**
 * Stores what is new of a batch, in one transaction with the marks up to which everything is here. A number that is here
 * already is ignored, and a mark never passes a gap, so the bridge keeps what is missing and sends it again.
 */
export function storeBatch(
  db: Database,
  { bridgeId, events, summaries }: SpoolBatch,
): Promise<{ confirmedEvent: number; confirmedSummary: number }> {
  const eventRows = events.map(({ at, ...event }) => ({
    ...event,
    bridgeId,
    happenedAt: new Date(at * 1000),
  }))
  const summaryRows = summaries.map((summary) => ({ ...summary, bridgeId }))

  return write(db, async (tx) => {
    for (const rows of chunks(eventRows)) await tx.insert(benchEvents).values(rows).onConflictDoNothing()
    for (const rows of chunks(summaryRows))
      await tx.insert(channelSummaries).values(rows).onConflictDoNothing()

    const mark = await tx.query.spoolMarks.findFirst({ where: eq(spoolMarks.bridgeId, bridgeId) })
    const confirmedEvent = await lastBeforeGap(tx, benchEvents, bridgeId, mark?.confirmedEvent ?? 0)
    const confirmedSummary = await lastBeforeGap(tx, channelSummaries, bridgeId, mark?.confirmedSummary ?? 0)
    await tx
      .insert(spoolMarks)
      .values({ bridgeId, confirmedEvent, confirmedSummary })
      .onConflictDoUpdate({ target: spoolMarks.bridgeId, set: { confirmedEvent, confirmedSummary } })
    return { confirmedEvent, confirmedSummary }
  })
}

/** The highest number that is reached from `mark` without a gap. */
async function lastBeforeGap(
  tx: Transaction,
  table: Numbered,
  bridgeId: string,
  mark: number,
): Promise<number> {
  const rows = await tx
    .select({ sequence: table.sequence })
    .from(table)
    .where(and(eq(table.bridgeId, bridgeId), gt(table.sequence, mark)))
    .orderBy(asc(table.sequence))
  let last = mark
  for (const { sequence } of rows) {
    if (sequence !== last + 1) break
    last = sequence
  }
  return last
}

function* chunks<Row>(rows: Row[]): Generator<Row[]> {
  for (let start = 0; start < rows.length; start += rowsAStatement)
    yield rows.slice(start, start + rowsAStatement)
}
