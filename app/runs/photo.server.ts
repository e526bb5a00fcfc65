import { and, eq } from 'drizzle-orm'
import { data } from 'react-router'
import { type Answered, done, fieldErrors, ownCodes, refused } from '../benches/action-reply.ts'
import { requireRuler } from '../benches/scale.ts'
import { visibleTo, type Watcher } from '../benches/visible-benches.server.ts'
import { type Database, write } from '../db/client.server.ts'
import { benches, photos, readings } from '../db/schema.ts'
import { dropPhoto, keepPhoto } from '../files/photo-files.server.ts'
import { type Picture, PictureRefused, takePicture } from '../files/picture.server.ts'
import { readUpload } from '../files/upload.server.ts'
import { requireVisibleReading } from './visible-reading.server.ts'

/** Enough to try again with a better light; each is a file that is kept for good. */
const mostPhotos = 8

const struck = refused({ code: ownCodes.struck, sentence: 'This reading is struck: capture a new one.' })
const tooMany = refused({
  code: ownCodes.tooManyPhotos,
  sentence: `You have sent ${mostPhotos} photos of this reading, which is the most. Measure one of them.`,
})

/**
 * Keeps a photo of a reading's beam, made anew from what was sent. Whoever may watch the bench may send theirs. What is
 * refused leaves neither a row nor a file. Throws a 404 for a reading on another's bench.
 */
export async function addPhoto(
  db: Database,
  scope: { benchId: string; readingId: string; person: Watcher; request: Request },
): Promise<Answered> {
  const { person, request } = scope
  const reading = await requireVisibleReading(db, scope)
  requireRuler(reading.config)
  if (reading.isStruck) return { status: 409, reply: struck }
  const sent = await readUpload(request, 'photo')
  if (!sent) return refuseField('Choose a photo of the beam with its scale first.')
  let picture: Picture
  try {
    picture = await takePicture(sent)
  } catch (error) {
    if (error instanceof PictureRefused) return refuseField(error.message)
    throw error
  }

  const { bytes, ...figures } = picture
  const id = crypto.randomUUID()
  try {
    await keepPhoto(id, bytes)
    // Looked up again where the row is written: a strike may have come since, or a photo from another page.
    const refusal = await write(db, async (tx) => {
      if ((await requireVisibleReading(tx, scope)).isStruck) return struck
      const own = and(eq(photos.readingId, reading.id), eq(photos.personId, person.id))
      if ((await tx.$count(photos, own)) >= mostPhotos) return tooMany
      await tx.insert(photos).values({
        id,
        readingId: reading.id,
        personId: person.id,
        uploadedAt: new Date(),
        bytes: bytes.byteLength,
        ...figures,
      })
      return null
    })
    if (!refusal)
      return { status: 200, reply: done(`The photo of reading ${reading.number} is kept. Now mark it.`) }
    await dropPhoto(id)
    return { status: 409, reply: refusal }
  } catch (error) {
    await dropPhoto(id)
    throw error
  }
}

const refuseField = (sentence: string): Answered => ({
  status: 400,
  reply: fieldErrors({ photo: [sentence] }),
})

/** A photo of a reading of a bench that this person may watch. Throws a 404 when there is none. */
export async function requireVisiblePhoto(
  db: Parameters<typeof visibleTo>[0],
  scope: { benchId: string; readingId: string; photoId: string; person: Watcher },
): Promise<{ id: string; width: number; height: number; bytes: number; digest: string }> {
  const { benchId, readingId, photoId, person } = scope
  const [photo] = await db
    .select({
      id: photos.id,
      width: photos.width,
      height: photos.height,
      bytes: photos.bytes,
      digest: photos.digest,
    })
    .from(photos)
    .innerJoin(readings, eq(readings.id, photos.readingId))
    .innerJoin(benches, eq(benches.id, readings.benchId))
    .where(
      and(
        eq(photos.id, photoId),
        eq(readings.id, readingId),
        eq(readings.benchId, benchId),
        visibleTo(db, person),
      ),
    )
  if (!photo) throw data('There is no such photo, or it is not of one of your benches.', { status: 404 })
  return photo
}
