import { sql } from 'drizzle-orm'
import { blob, index, integer, primaryKey, real, sqliteTable, text, unique } from 'drizzle-orm/sqlite-core'
import type { FieldFactor } from '../analysis/reading.ts'
import type { ImportMapping } from '../imports/mapping.ts'
import type { CommissionedBench, TypedBench } from '../protocol/bench-config.ts'
import type { ChannelStatus } from '../protocol/messages.ts'
import type { Symbols } from '../relation/quantities.ts'

const id = () =>
  text()
    .primaryKey()
    .$defaultFn(() => crypto.randomUUID())
const at = () => integer({ mode: 'timestamp_ms' })
const createdAt = () => at().notNull().default(sql`(unixepoch('subsec') * 1000)`)

export const people = sqliteTable('people', {
  id: id(),
  email: text().notNull().unique(),
  name: text().notNull(),
  role: text({ enum: ['technician', 'instructor', 'student'] }).notNull(),
  passwordHash: text().notNull(),
  roomLight: text({ enum: ['lit', 'dark'] })
    .notNull()
    .default('lit'),
  createdAt: createdAt(),
  disabledAt: at(),
})

/** A session is a row, so that it can be revoked. The cookie holds its id, signed. */
export const sessions = sqliteTable(
  'sessions',
  {
    id: id(),
    personId: text()
      .notNull()
      .references(() => people.id),
    createdAt: createdAt(),
    lastSeenAt: createdAt(),
    expiresAt: at().notNull(),
    revokedAt: at(),
  },
  (table) => [index('sessions_person').on(table.personId)],
)

/** The cautions as acknowledged: once a person and a term, in the wording of that version. */
export const acknowledgements = sqliteTable(
  'acknowledgements',
  {
    personId: text()
      .notNull()
      .references(() => people.id),
    term: text().notNull(),
    cautionsVersion: integer().notNull(),
    acknowledgedAt: createdAt(),
  },
  (table) => [primaryKey({ columns: [table.personId, table.term, table.cautionsVersion] })],
)

export const benches = sqliteTable('benches', {
  id: text().primaryKey(),
  name: text().notNull(),
  place: text().notNull(),
  createdAt: createdAt(),
})

/** Each save is a new revision; a reading keeps the one that it was taken under. */
export const benchRevisions = sqliteTable(
  'bench_revisions',
  {
    benchId: text()
      .notNull()
      .references(() => benches.id),
    revision: integer().notNull(),
    config: text({ mode: 'json' }).$type<CommissionedBench>().notNull(),
    personId: text().references(() => people.id),
    note: text().notNull().default(''),
    createdAt: createdAt(),
  },
  (table) => [primaryKey({ columns: [table.benchId, table.revision] })],
)

export const classes = sqliteTable('classes', { id: id(), name: text().notNull(), createdAt: createdAt() })

export const classMembers = sqliteTable(
  'class_members',
  {
    classId: text()
      .notNull()
      .references(() => classes.id),
    personId: text()
      .notNull()
      .references(() => people.id),
  },
  (table) => [
    primaryKey({ columns: [table.classId, table.personId] }),
    index('class_members_person').on(table.personId),
  ],
)

export const classBenches = sqliteTable(
  'class_benches',
  {
    classId: text()
      .notNull()
      .references(() => classes.id),
    benchId: text()
      .notNull()
      .references(() => benches.id),
  },
  (table) => [primaryKey({ columns: [table.classId, table.benchId] })],
)

/** Every change asked of a bench: setpoints, outputs, controls, make safe. Who, when, what was asked, what the bridge answered. */
export const benchCommands = sqliteTable(
  'bench_commands',
  {
    id: id(),
    benchId: text().references(() => benches.id),
    personId: text()
      .notNull()
      .references(() => people.id),
    askedAt: createdAt(),
    kind: text().notNull(),
    asked: text({ mode: 'json' }).$type<Record<string, unknown>>().notNull(),
    /** Null until the bridge has answered; 'unanswered' when it did not. */
    outcome: text({ enum: ['accepted', 'refused', 'unanswered'] }),
    answer: text(),
    answeredAt: at(),
  },
  (table) => [index('bench_commands_bench').on(table.benchId, table.askedAt)],
)

/** What happened, as the bridge tells it. A bridge numbers its events; what is already here is ignored. */
export const benchEvents = sqliteTable(
  'bench_events',
  {
    bridgeId: text().notNull(),
    sequence: integer().notNull(),
    benchId: text(),
    kind: text().notNull(),
    happenedAt: at().notNull(),
    personId: text(),
    personName: text(),
    sentence: text().notNull(),
    data: text({ mode: 'json' }).$type<Record<string, unknown>>().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.bridgeId, table.sequence] }),
    index('bench_events_bench').on(table.benchId, table.happenedAt),
  ],
)

export const channelSummaries = sqliteTable(
  'channel_summaries',
  {
    bridgeId: text().notNull(),
    sequence: integer().notNull(),
    benchId: text().notNull(),
    second: integer().notNull(),
    channel: text().notNull(),
    min: real().notNull(),
    mean: real().notNull(),
    max: real().notNull(),
    count: integer().notNull(),
  },
  (table) => [
    primaryKey({ columns: [table.bridgeId, table.sequence] }),
    index('channel_summaries_bench').on(table.benchId, table.second),
  ],
)

/** Up to which number everything that a bridge has sent is here. */
export const spoolMarks = sqliteTable('spool_marks', {
  bridgeId: text().primaryKey(),
  confirmedEvent: integer().notNull(),
  confirmedSummary: integer().notNull(),
})

/**
 * A series of readings on one bench: the logbook's page. An imported one may have no bench, and then a field of its own,
 * which stands in `imports`.
 */
export const runs = sqliteTable(
  'runs',
  {
    id: id(),
    benchId: text().references(() => benches.id),
    personId: text()
      .notNull()
      .references(() => people.id),
    startedAt: createdAt(),
    endedAt: at(),
  },
  (table) => [index('runs_bench').on(table.benchId, table.startedAt)],
)

/**
 * A voltage and a current with which the beam was read. Values as measured, in SI, never overwritten.
 * `measured`: a window that the bridge captured, with its samples. `typed`: read off meters by a person. `imported`: out of
 * a file; its uncertainties are as they were stated, 0 where they were not.
 */
export const readings = sqliteTable(
  'readings',
  {
    id: id(),
    runId: text()
      .notNull()
      .references(() => runs.id),
    number: integer().notNull(),
    /** Null with the run's. */
    benchId: text(),
    revision: integer(),
    personId: text()
      .notNull()
      .references(() => people.id),
    capturedAt: at().notNull(),
    source: text({ enum: ['measured', 'typed', 'imported'] })
      .notNull()
      .default('measured'),
    windowSeconds: real().notNull(),
    polarity: integer().notNull(),
    anodeVolts: real().notNull(),
    uAnodeVolts: real().notNull(),
    anodeEffectiveCount: real().notNull(),
    coilAmps: real().notNull(),
    uCoilAmps: real().notNull(),
    coilEffectiveCount: real().notNull(),
    /** Size of the last digit of a number that a person wrote; null where the meter itself tells it. */
    anodeDigitVolts: real(),
    coilDigitAmps: real(),
    states: text({ mode: 'json' }).$type<Partial<Record<string, ChannelStatus>>>().notNull(),
  },
  (table) => [unique().on(table.runId, table.number)],
)

/** The chain of a bench without ports as a person ticked it for a run: every contact in the words that it then had. */
export const checklists = sqliteTable(
  'checklists',
  {
    id: id(),
    runId: text()
      .notNull()
      .references(() => runs.id),
    personId: text()
      .notNull()
      .references(() => people.id),
    revision: integer().notNull(),
    contacts: text({ mode: 'json' }).$type<TypedBench['checklist']>().notNull(),
    tickedAt: createdAt(),
  },
  (table) => [index('checklists_run').on(table.runId)],
)

/** The raw samples of a reading: one row a channel, little-endian float64, NaN where there was no reading. */
export const readingSamples = sqliteTable(
  'reading_samples',
  {
    readingId: text()
      .notNull()
      .references(() => readings.id),
    channel: text().notNull(),
    timesSeconds: blob({ mode: 'buffer' }).notNull(),
    values: blob({ mode: 'buffer' }).notNull(),
    mean: real(),
    standardDeviation: real(),
    standardError: real(),
    effectiveCount: real(),
    count: integer().notNull(),
  },
  (table) => [primaryKey({ columns: [table.readingId, table.channel] })],
)

/** The edges as one person read them off the scale. A correction is a new row; the newest of a person counts. */
export const edges = sqliteTable(
  'edges',
  {
    id: id(),
    readingId: text()
      .notNull()
      .references(() => readings.id),
    personId: text()
      .notNull()
      .references(() => people.id),
    leftMetres: real().notNull(),
    rightMetres: real().notNull(),
    enteredAt: createdAt(),
  },
  (table) => [index('edges_reading').on(table.readingId)],
)

/**
 * The rung that the beam was made to meet, and how far the current could be moved before it no longer did. One beam meets
 * one rung: the newest row of a reading counts, whoever wrote it.
 */
export const rungs = sqliteTable(
  'rungs',
  {
    id: id(),
    readingId: text()
      .notNull()
      .references(() => readings.id),
    personId: text()
      .notNull()
      .references(() => people.id),
    /** Its name on the bench of the reading's revision. */
    rung: text().notNull(),
    settingHalfWidthAmps: real(),
    enteredAt: createdAt(),
  },
  (table) => [index('rungs_reading').on(table.readingId)],
)

/** The file that a run was imported from, and how it was read. Of the file itself the digest is kept. */
export const imports = sqliteTable('imports', {
  runId: text()
    .primaryKey()
    .references(() => runs.id),
  personId: text()
    .notNull()
    .references(() => people.id),
  importedAt: createdAt(),
  fileName: text().notNull(),
  /** SHA-256 of the bytes as they were sent, hexadecimal. */
  digest: text().notNull(),
  bytes: integer().notNull(),
  rowsLeftOut: integer().notNull(),
  mapping: text({ mode: 'json' }).$type<ImportMapping>().notNull(),
  /** Of a run without a bench: the centre field an ampere, in teslas, with its standard uncertainty. */
  field: text({ mode: 'json' }).$type<FieldFactor>(),
})

/** The diameter of an imported reading as its file has it; the two edges where it has those. */
export const statedDiameters = sqliteTable('stated_diameters', {
  readingId: text()
    .primaryKey()
    .references(() => readings.id),
  diameterMetres: real().notNull(),
  uDiameterMetres: real().notNull(),
  leftMetres: real(),
  rightMetres: real(),
})

/** A photo of a reading's beam. The picture itself is a file, named by the row; it is never changed. */
export const photos = sqliteTable(
  'photos',
  {
    id: id(),
    readingId: text()
      .notNull()
      .references(() => readings.id),
    personId: text()
      .notNull()
      .references(() => people.id),
    uploadedAt: createdAt(),
    /** SHA-256 of the stored bytes, hexadecimal. */
    digest: text().notNull(),
    width: integer().notNull(),
    height: integer().notNull(),
    bytes: integer().notNull(),
  },
  (table) => [index('photos_reading').on(table.readingId)],
)

/**
 * What one person marked on a photo, and the diameter that follows, as it stands on the scale. A correction is a new row;
 * the newest of a person counts, be it this or edges.
 */
export const photoMeasurements = sqliteTable(
  'photo_measurements',
  {
    id: id(),
    photoId: text()
      .notNull()
      .references(() => photos.id),
    personId: text()
      .notNull()
      .references(() => people.id),
    /** In pixels of the stored picture, from its upper left corner. */
    scaleMarks: text({ mode: 'json' }).$type<{ x: number; y: number; scaleMetres: number }[]>().notNull(),
    points: text({ mode: 'json' }).$type<{ x: number; y: number }[]>().notNull(),
    diameterMetres: real().notNull(),
    uCircleMetres: real().notNull(),
    /** Null where they are not limited. */
    circleDegreesOfFreedom: real(),
    uScaleMetres: real().notNull(),
    scaleDegreesOfFreedom: real(),
    measuredAt: createdAt(),
  },
  (table) => [index('photo_measurements_photo').on(table.photoId)],
)

/** A reading is struck with a reason, never deleted. */
export const strikes = sqliteTable('strikes', {
  readingId: text()
    .primaryKey()
    .references(() => readings.id),
  personId: text()
    .notNull()
    .references(() => people.id),
  reason: text().notNull(),
  struckAt: createdAt(),
})

/** A setting that a run is still to be read at: proposed by its analysis or by the planner, added by a person. */
export const plannedSettings = sqliteTable(
  'planned_settings',
  {
    id: id(),
    runId: text()
      .notNull()
      .references(() => runs.id),
    personId: text()
      .notNull()
      .references(() => people.id),
    anodeVolts: real().notNull(),
    coilAmps: real().notNull(),
    polarity: integer().notNull(),
    addedAt: createdAt(),
  },
  (table) => [unique().on(table.runId, table.anodeVolts, table.coilAmps, table.polarity)],
)

/** Which of the fits a person states as the result of a run. The newest counts; without one it is the general model's. */
export const statements = sqliteTable(
  'statements',
  {
    id: id(),
    runId: text()
      .notNull()
      .references(() => runs.id),
    personId: text()
      .notNull()
      .references(() => people.id),
    fit: text().notNull(),
    statedAt: createdAt(),
  },
  (table) => [index('statements_run').on(table.runId)],
)

/** A person's own formula for e/m that held when it was checked, with what each of its symbols stands for. */
export const relations = sqliteTable(
  'relations',
  {
    id: id(),
    personId: text()
      .notNull()
      .references(() => people.id),
    /** Where it was checked. It belongs to no bench: with the coils of any it gives a value. */
    benchId: text()
      .notNull()
      .references(() => benches.id),
    text: text().notNull(),
    symbols: text({ mode: 'json' }).$type<Symbols>().notNull(),
    /** Of the settings that it was checked at. */
    seed: integer().notNull(),
    checkedAt: createdAt(),
  },
  (table) => [index('relations_person').on(table.personId, table.checkedAt)],
)
