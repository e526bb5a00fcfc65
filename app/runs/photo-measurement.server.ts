import { type Answered, done, fieldErrors, ownCodes, refused } from '../benches/action-reply.ts'
import { requireRuler } from '../benches/scale.ts'
import type { Watcher } from '../benches/visible-benches.server.ts'
import { type Database, write } from '../db/client.server.ts'
import { photoMeasurements } from '../db/schema.ts'
import { requireVisiblePhoto } from './photo.server.ts'
import { measureMarks, readMarks } from './photo-marks.ts'
import { requireVisibleReading } from './visible-reading.server.ts'

/**
 * Stores what this person marked on a photo, with the diameter that the server works out from it. Whoever may watch the
 * bench may measure its photos; a correction is one more row. Throws a 404 for a photo of another's bench, and a 400 for
 * marks that the page does not send.
 */
export function measurePhotoOf(
  db: Database,
  request: { benchId: string; readingId: string; photoId: string; person: Watcher; form: FormData },
): Promise<Answered> {
  return write(db, async (tx): Promise<Answered> => {
    const photo = await requireVisiblePhoto(tx, request)
    const reading = await requireVisibleReading(tx, request)
    if (reading.isStruck)
      return {
        status: 409,
        reply: refused({ code: ownCodes.struck, sentence: 'This reading is struck: capture a new one.' }),
      }
    const typed = readMarks(request.form)
    if (!typed) return { status: 400, reply: fieldErrors({ marks: ['These are no marks of this page.'] }) }
    const { measured, sentence } = measureMarks(typed, { photo, scale: requireRuler(reading.config) })
    if (!measured) return { status: 400, reply: fieldErrors({ marks: [sentence] }) }
    const { measurement, ...marks } = measured
    const { diameterMetres, uCircleMetres, uScaleMetres } = measurement
    await tx.insert(photoMeasurements).values({
      photoId: photo.id,
      personId: request.person.id,
      ...marks,
      diameterMetres,
      uCircleMetres,
      circleDegreesOfFreedom: orNull(measurement.circleDegreesOfFreedom),
      uScaleMetres,
      scaleDegreesOfFreedom: orNull(measurement.scaleDegreesOfFreedom),
      measuredAt: new Date(),
    })
    return { status: 200, reply: done(`The diameter of reading ${reading.number} is saved.`) }
  })
}

const orNull = (degreesOfFreedom: number) => (Number.isFinite(degreesOfFreedom) ? degreesOfFreedom : null)
