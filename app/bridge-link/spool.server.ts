import { and, asc, between, eq, gt, max } from 'drizzle-orm'
import { type Database, type Transaction, write } from '../db/client.server.ts'
import { benchEvents, channelSummaries, spoolMarks } from '../db/schema.ts'
import type { SpoolBatch, SpoolReply } from '../protocol/commands.ts'

type Numbered = typeof benchEvents | typeof channelSummaries
type EventRow = typeof benchEvents.$inferInsert
type SummaryRow = typeof channelSummaries.$inferInsert

// Below the number of values that SQLite binds in one statement.
const rowsAStatement = 500

/**
 * Stores what is new of a batch, in one transaction with the marks up to which everything is here. A number that is here
 * already is ignored, and a mark passes a gap only when the bridge can no longer fill it; the gap is then an event of its
 * own. A number that stands here for something else is never overwritten: the bridge is told to number on behind.
 */
export function storeBatch(
  db: Database,
  { bridgeId, oldest, events, summaries }: SpoolBatch,
): Promise<SpoolReply> {
  const eventRows: EventRow[] = events.map(({ at, ...event }) => ({
    ...event,
    bridgeId,
    happenedAt: new Date(at * 1000),
  }))
  const summaryRows: SummaryRow[] = summaries.map((summary) => ({ ...summary, bridgeId }))

  return write(db, async (tx) => {
    const otherEvent = firstOther(eventRows, await storedEvents(tx, bridgeId, eventRows), eventContent)
    const otherSummary = firstOther(
      summaryRows,
      await storedSummaries(tx, bridgeId, summaryRows),
      summaryContent,
    )
    const before = <Row extends { sequence: number }>(rows: Row[], other: number | null) =>
      other === null ? rows : rows.filter(({ sequence }) => sequence < other)
    for (const rows of chunks(before(eventRows, otherEvent)))
      await tx.insert(benchEvents).values(rows).onConflictDoNothing()
    for (const rows of chunks(before(summaryRows, otherSummary)))
      await tx.insert(channelSummaries).values(rows).onConflictDoNothing()

    const mark = await tx.query.spoolMarks.findFirst({ where: eq(spoolMarks.bridgeId, bridgeId) })
    let event = await lastBeforeGap(tx, benchEvents, bridgeId, mark?.confirmedEvent ?? 0)
    if (event < oldest.event - 1) {
      await tx.insert(benchEvents).values(gapEvent(bridgeId, event + 1, oldest.event - 1))
      event = await lastBeforeGap(tx, benchEvents, bridgeId, oldest.event - 1)
    }
    const summary = await lastBeforeGap(
      tx,
      channelSummaries,
      bridgeId,
      Math.max(mark?.confirmedSummary ?? 0, oldest.summary - 1),
    )
    const marks = { confirmedEvent: event, confirmedSummary: summary }
    await tx
      .insert(spoolMarks)
      .values({ bridgeId, ...marks })
      .onConflictDoUpdate({ target: spoolMarks.bridgeId, set: marks })
    if (otherEvent === null && otherSummary === null) return marks
    return {
      confirmedEvent: otherEvent === null ? event : otherEvent - 1,
      confirmedSummary: otherSummary === null ? summary : otherSummary - 1,
      continueAfter: {
        ...(otherEvent !== null && { event: await highest(tx, benchEvents, bridgeId) }),
        ...(otherSummary !== null && { summary: await highest(tx, channelSummaries, bridgeId) }),
      },
    }
  })
}

/** What stands in the log for events that are gone for good. It bears the first of their numbers. */
function gapEvent(bridgeId: string, first: number, last: number): EventRow {
  const which = first === last ? `Event ${first}` : `Events ${first} to ${last}`
  return {
    bridgeId,
    sequence: first,
    benchId: null,
    kind: 'warning',
    happenedAt: new Date(),
    sentence: `${which} of the bridge ${bridgeId} cannot be had any more: this database is older than what the bridge was told to forget, as after a backup was restored.`,
    data: { firstMissing: first, lastMissing: last },
  }
}

const eventContent = ({ happenedAt, kind, benchId, sentence }: EventRow) =>
  JSON.stringify([happenedAt.getTime(), kind, benchId, sentence])
const summaryContent = ({ benchId, second, channel, mean }: SummaryRow) =>
  JSON.stringify([benchId, second, channel, mean])

/** The lowest number of the rows that stands for something else where they are stored, or null. */
function firstOther<Row extends { sequence: number }>(
  rows: readonly Row[],
  stored: readonly Row[],
  content: (row: Row) => string,
): number | null {
  const known = new Map(stored.map((row) => [row.sequence, content(row)]))
  const others = rows.filter((row) => known.has(row.sequence) && known.get(row.sequence) !== content(row))
  return others.length > 0 ? Math.min(...others.map(({ sequence }) => sequence)) : null
}

const storedEvents = (tx: Transaction, bridgeId: string, rows: readonly EventRow[]): Promise<EventRow[]> =>
  tx
    .select()
    .from(benchEvents)
    .where(and(eq(benchEvents.bridgeId, bridgeId), between(benchEvents.sequence, ...spanOf(rows))))

const storedSummaries = (
  tx: Transaction,
  bridgeId: string,
  rows: readonly SummaryRow[],
): Promise<SummaryRow[]> =>
  tx
    .select()
    .from(channelSummaries)
    .where(and(eq(channelSummaries.bridgeId, bridgeId), between(channelSummaries.sequence, ...spanOf(rows))))

function spanOf(rows: readonly { sequence: number }[]): [number, number] {
  const numbers = rows.map(({ sequence }) => sequence)
  return rows.length > 0 ? [Math.min(...numbers), Math.max(...numbers)] : [0, -1]
}

async function highest(tx: Transaction, table: Numbered, bridgeId: string): Promise<number> {
  const [row] = await tx
    .select({ last: max(table.sequence) })
    .from(table)
    .where(eq(table.bridgeId, bridgeId))
  return row?.last ?? 0
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
