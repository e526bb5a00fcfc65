import { Link } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import { benchPath, photoPath } from '#app/benches/bench-path.ts'
import type { PhotoView } from '#app/runs/photo-view.server.ts'
import { LocalTime } from '../local-time.tsx'
import { CountedReading } from './counted-reading.tsx'
import { PhotoMeasuring } from './photo-measuring.tsx'
import { PhotoUpload } from './photo-upload.tsx'

type Props = { view: PhotoView; reply: ActionReply | undefined }

/** Photos of one reading: sent, marked and measured, and what then counts. */
export function PhotoPage({ view, reply }: Props) {
  const { bench, reading, photo, photos } = view
  const ids = { benchId: bench.id, readingId: reading.id }
  return (
    <div className="grid grid-cols-[minmax(0,1fr)] gap-6 pb-10">
      <div className="flex flex-wrap items-baseline gap-x-5 gap-y-1">
        <h1 className="text-xl font-bold">Photo of reading {reading.number}</h1>
        <Link to={benchPath(ids)} className="link-alone text-ink-soft">
          To the logbook
        </Link>
      </div>
      {reading.struck && (
        <p className="font-medium">
          This reading is struck by {reading.struck.by}: {reading.struck.reason} Its photos stay to be seen.
        </p>
      )}
      {photo ? (
        <PhotoMeasuring key={photo.id} view={view} photo={photo} />
      ) : (
        <p className="max-w-[62ch] text-ink-soft">
          Nobody has sent a photo of this reading yet. Take one while the beam stands: you can mark it later,
          with the room lit.
        </p>
      )}
      <CountedReading view={view} />
      {photos.length > 1 && (
        <nav aria-label="Photos of this reading" className="grid gap-1 border-t border-rule pt-4">
          <h2 className="font-medium">Photos of this reading</h2>
          <ul>
            {photos.map(({ id, by, uploadedAt }) => (
              <li key={id}>
                <Link
                  to={`${photoPath(ids)}?${new URLSearchParams({ photo: id })}`}
                  aria-current={id === photo?.id ? 'page' : undefined}
                  className="link-alone aria-[current=page]:font-medium aria-[current=page]:no-underline"
                >
                  {by}, <LocalTime iso={uploadedAt} parts="date and seconds" />
                  {id === photo?.id && ' (shown)'}
                </Link>
              </li>
            ))}
          </ul>
        </nav>
      )}
      {!reading.struck && (
        <section aria-label="Send a photo" className={photo ? 'border-t border-rule pt-4' : ''}>
          <PhotoUpload {...ids} reply={reply} isFirst={!photo} />
        </section>
      )}
    </div>
  )
}
