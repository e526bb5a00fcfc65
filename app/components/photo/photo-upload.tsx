import { useId, useState } from 'react'
import { Form, useNavigation } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import { photoPath } from '#app/benches/bench-path.ts'
import { largestPhotoBytes, photoTypes, tooManyBytes } from '#app/files/picture-limits.ts'
import { AnswerLine } from '../answer-line.tsx'

type Props = { benchId: string; readingId: string; reply: ActionReply | undefined; isFirst: boolean }

/** Sends a photo of the beam. What is wrong with one stands beside the field, and nothing of it is kept. */
export function PhotoUpload({ benchId, readingId, reply, isFirst }: Props) {
  const id = useId()
  const isBusy = useNavigation().state !== 'idle'
  const [tooLarge, setTooLarge] = useState<string | null>(null)
  const [isChosen, setChosen] = useState(false)
  const answered = reply && !reply.ok ? reply.errors.photo : undefined
  // What the server said is of the file before, once another is chosen.
  const errors = tooLarge ? [tooLarge] : isChosen ? undefined : answered
  const [seen, setSeen] = useState(reply)
  if (reply !== seen) {
    setSeen(reply)
    setChosen(false)
  }

  function choose(event: React.ChangeEvent<HTMLInputElement>) {
    const size = event.target.files?.[0]?.size ?? 0
    setTooLarge(size > largestPhotoBytes ? tooManyBytes(size) : null)
    setChosen(true)
  }
  return (
    <Form
      method="post"
      action={photoPath({ benchId, readingId })}
      encType="multipart/form-data"
      className="grid justify-items-start gap-2"
    >
      <label htmlFor={id} className="font-medium">
        {isFirst ? 'Photo of the beam with its scale' : 'Another photo'}
      </label>
      <p id={`${id}-hint`} className="max-w-[62ch] text-[12.5px] text-ink-soft">
        JPEG, PNG or WebP, at most {largestPhotoBytes / 1e6} million bytes. Look straight at the beam, as for
        reading the edges, with beam and scale sharp and in one picture. Place, time and camera are taken out
        of the file before it is kept.
      </p>
      <input
        id={id}
        type="file"
        name="photo"
        accept={photoTypes.join(',')}
        onChange={choose}
        aria-invalid={errors ? true : undefined}
        aria-describedby={errors ? `${id}-hint ${id}-error` : `${id}-hint`}
        className="w-full max-w-md min-w-0 p-2 file:mr-3 file:cursor-pointer file:rounded-sm file:border file:border-solid file:border-ink file:bg-transparent file:px-3 file:py-1 file:font-medium file:text-ink touch:min-h-12"
      />
      {errors && (
        <p id={`${id}-error`} role="alert" className="max-w-[62ch] font-medium text-trip">
          {errors.join(' ')}
        </p>
      )}
      <button
        type="submit"
        disabled={isBusy || tooLarge !== null}
        className={`button ${isFirst ? 'button-main' : ''}`}
      >
        {isBusy ? 'Sending…' : 'Send the photo'}
      </button>
      <AnswerLine reply={reply} fields={['photo']} />
    </Form>
  )
}
