import { asc, eq, sql } from 'drizzle-orm'
import type { PhotoDiameter } from '../analysis/reading.ts'
import type { Database } from '../db/client.server.ts'
import { edges, people, photoMeasurements, photos, readings, rungs, statedDiameters } from '../db/schema.ts'

type By = { personId: string; name: string }
type EdgesRead = By & { leftMetres: number; rightMetres: number }
type PhotoRead = By & PhotoDiameter & { photoId: string }
type RungRead = By & { rung: string; settingHalfWidthAmps: number | null }

type StatedDiameter = Omit<typeof statedDiameters.$inferSelect, 'readingId'>

/**
 * What counts of each person for one reading, the newest of edges and photo, in the order in which it came; or the rung
 * that the beam met, the newest of anyone; or what the file says that the reading was imported from.
 */
export type Reads = {
  edges: EdgesRead[]
  photos: PhotoRead[]
  rung: RungRead | null
  stated: StatedDiameter | null
}

export const noReads: Reads = { edges: [], photos: [], rung: null, stated: null }

/** What people read of the beam, by reading of a run. */
export async function findReads(db: Database, runId: string): Promise<Map<string, Reads>> {
  const [rungOf, statedOf, ...both] = await Promise.all([
    findRungs(db, runId),
    findStated(db, runId),
    selectEdges(db, runId),
    selectPhotos(db, runId),
  ])
  const rows = both.flat()
  const byReading = new Map<string, Map<string, (typeof rows)[number]>>()
  // Sorting keeps the order in which the rows of one millisecond were written.
  for (const row of rows.toSorted((a, b) => a.at.getTime() - b.at.getTime())) {
    const byPerson = byReading.get(row.readingId) ?? new Map()
    byPerson.delete(row.by.personId)
    byReading.set(row.readingId, byPerson.set(row.by.personId, row))
  }
  const readingIds = new Set([...byReading.keys(), ...rungOf.keys(), ...statedOf.keys()])
  return new Map(
    [...readingIds].map((readingId) => {
      const newest = [...(byReading.get(readingId)?.values() ?? [])]
      return [
        readingId,
        {
          edges: newest.flatMap(({ by, edges }) => (edges ? [{ ...by, ...edges }] : [])),
          photos: newest.flatMap(({ by, photo }) => (photo ? [{ ...by, ...photo }] : [])),
          rung: rungOf.get(readingId) ?? null,
          stated: statedOf.get(readingId) ?? null,
        },
      ]
    }),
  )
}

async function findRungs(db: Database, runId: string): Promise<Map<string, RungRead>> {
  const rows = await db
    .select({
      readingId: rungs.readingId,
      personId: rungs.personId,
      name: people.name,
      rung: rungs.rung,
      settingHalfWidthAmps: rungs.settingHalfWidthAmps,
    })
    .from(rungs)
    .innerJoin(readings, eq(readings.id, rungs.readingId))
    .innerJoin(people, eq(people.id, rungs.personId))
    .where(eq(readings.runId, runId))
    .orderBy(asc(rungs.enteredAt), asc(sql`${rungs}.rowid`))
  // Of several rows the newest stays.
  return new Map(rows.map(({ readingId, ...rung }) => [readingId, rung]))
}

async function findStated(db: Database, runId: string): Promise<Map<string, StatedDiameter>> {
  const rows = await db
    .select({ stated: statedDiameters })
    .from(statedDiameters)
    .innerJoin(readings, eq(readings.id, statedDiameters.readingId))
    .where(eq(readings.runId, runId))
  return new Map(rows.map(({ stated: { readingId, ...stated } }) => [readingId, stated]))
}

async function selectEdges(db: Database, runId: string) {
  const rows = await db
    .select({
      readingId: edges.readingId,
      at: edges.enteredAt,
      by: { personId: edges.personId, name: people.name },
      edges: { leftMetres: edges.leftMetres, rightMetres: edges.rightMetres },
    })
    .from(edges)
    .innerJoin(readings, eq(readings.id, edges.readingId))
    .innerJoin(people, eq(people.id, edges.personId))
    .where(eq(readings.runId, runId))
    .orderBy(asc(sql`${edges}.rowid`))
  return rows.map((row) => ({ ...row, photo: null }))
}

async function selectPhotos(db: Database, runId: string) {
  const rows = await db
    .select({
      readingId: photos.readingId,
      at: photoMeasurements.measuredAt,
      by: { personId: photoMeasurements.personId, name: people.name },
      photo: {
        photoId: photoMeasurements.photoId,
        diameterMetres: photoMeasurements.diameterMetres,
        uCircleMetres: photoMeasurements.uCircleMetres,
        circleDegreesOfFreedom: photoMeasurements.circleDegreesOfFreedom,
        uScaleMetres: photoMeasurements.uScaleMetres,
        scaleDegreesOfFreedom: photoMeasurements.scaleDegreesOfFreedom,
      },
    })
    .from(photoMeasurements)
    .innerJoin(photos, eq(photos.id, photoMeasurements.photoId))
    .innerJoin(readings, eq(readings.id, photos.readingId))
    .innerJoin(people, eq(people.id, photoMeasurements.personId))
    .where(eq(readings.runId, runId))
    .orderBy(asc(sql`${photoMeasurements}.rowid`))
  return rows.map(({ photo, ...row }) => ({
    ...row,
    edges: null,
    photo: {
      ...photo,
      circleDegreesOfFreedom: photo.circleDegreesOfFreedom ?? Number.POSITIVE_INFINITY,
      scaleDegreesOfFreedom: photo.scaleDegreesOfFreedom ?? Number.POSITIVE_INFINITY,
    },
  }))
}
