import { and, asc, desc, eq, sql } from 'drizzle-orm'
import { data } from 'react-router'
import { parallaxFactor } from '../analysis/parallax.ts'
import { requireRuler } from '../benches/scale.ts'
import { requireVisibleBench, toFramed, type Watcher } from '../benches/visible-benches.server.ts'
import type { Database } from '../db/client.server.ts'
import { people, photoMeasurements, photos } from '../db/schema.ts'
import type { BenchConfig, RulerScale } from '../protocol/bench-config.ts'
import type { Role } from '../safety/types.ts'
import type { TypedMarks } from './photo-marks.ts'
import { listReadings, type ReadingView } from './reading-view.server.ts'
import { requireVisibleReading } from './visible-reading.server.ts'

export type PhotoView = {
  bench: { id: string; name: string; place: string; hasPorts: boolean }
  person: { id: string; role: Role }
  reading: ReadingView
  edges: BenchConfig['tube']['edges']
  scale: Pick<RulerScale, 'lengthMetres' | 'graduationMetres'>
  /** The diameter on the scale times this is the beam's. */
  parallax: number
  isVirtual: boolean
  /** All of this reading, oldest first. */
  photos: { id: string; by: string; uploadedAt: string }[]
  /** The one that is shown: the one asked for, else the newest of this person's own, else the newest. */
  photo: { id: string; width: number; height: number } | null
  /** What this person saved last on the photo that is shown. */
  saved: TypedMarks | null
}

/** All that the page shows on which a reading's photo is measured. Throws a 404 for another's reading or photo. */
export async function loadPhotoView(
  db: Database,
  scope: {
    benchId: string
    readingId: string
    photoId: string | null
    person: Watcher
  },
): Promise<PhotoView> {
  const { person, photoId } = scope
  const [bench, { config, runId }] = await Promise.all([
    requireVisibleBench(db, scope),
    requireVisibleReading(db, scope),
  ])
  const [readings, all] = await Promise.all([
    listReadings(db, { runId }),
    db
      .select({
        id: photos.id,
        personId: photos.personId,
        by: people.name,
        uploadedAt: photos.uploadedAt,
        width: photos.width,
        height: photos.height,
      })
      .from(photos)
      .innerJoin(people, eq(people.id, photos.personId))
      .where(eq(photos.readingId, scope.readingId))
      .orderBy(asc(photos.uploadedAt), sql`${photos}.rowid`),
  ])
  const reading = readings.find((it) => it.id === scope.readingId)
  const shown = photoId
    ? all.find((photo) => photo.id === photoId)
    : (all.findLast((photo) => photo.personId === person.id) ?? all.at(-1))
  if (!reading || (photoId && !shown)) throw data('There is no such photo of this reading.', { status: 404 })
  const { tube, picturePath } = config
  const scale = requireRuler(config)
  return {
    bench: toFramed(bench),
    person: { id: person.id, role: person.role },
    reading,
    edges: tube.edges,
    scale: { lengthMetres: scale.lengthMetres, graduationMetres: scale.graduationMetres },
    parallax: parallaxFactor(scale),
    isVirtual: picturePath !== null,
    photos: all.map(({ id, by, uploadedAt }) => ({ id, by, uploadedAt: uploadedAt.toISOString() })),
    photo: shown ? { id: shown.id, width: shown.width, height: shown.height } : null,
    saved: shown ? await findSaved(db, { photoId: shown.id, personId: person.id }) : null,
  }
}

async function findSaved(
  db: Database,
  { photoId, personId }: { photoId: string; personId: string },
): Promise<TypedMarks | null> {
  const [row] = await db
    .select({ scaleMarks: photoMeasurements.scaleMarks, points: photoMeasurements.points })
    .from(photoMeasurements)
    .where(and(eq(photoMeasurements.photoId, photoId), eq(photoMeasurements.personId, personId)))
    .orderBy(desc(photoMeasurements.measuredAt), desc(sql`${photoMeasurements}.rowid`))
    .limit(1)
  if (!row) return null
  return {
    scaleMarks: row.scaleMarks.map(({ x, y, scaleMetres }) => ({
      x,
      y,
      centimetres: String(+(scaleMetres * 100).toFixed(5)),
    })),
    points: row.points,
  }
}
