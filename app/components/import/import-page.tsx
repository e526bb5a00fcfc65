import { useRef, useState } from 'react'
import { useFetcher } from 'react-router'
import type { ActionReply } from '#app/benches/action-reply.ts'
import type { ImportBench, ImportReply } from '#app/imports/import-view.ts'
import { largestCsvBytes, tooManyBytes } from '#app/imports/limits.ts'
import { AnswerLine } from '../answer-line.tsx'
import { Columns } from './columns.tsx'
import { FieldChoice } from './field-choice.tsx'
import { FileField } from './file-field.tsx'
import { Outcome } from './outcome.tsx'
import { Reading } from './reading.tsx'

type Reply = ImportReply | ActionReply
type Props = { benches: ImportBench[]; answered: Reply | undefined }

const hasPreview = (reply: Reply | undefined): reply is ImportReply =>
  reply !== undefined && 'fileErrors' in reply

/** Readings of others become a run of one's own: the file, what its columns hold, and what would be stored, before it is. */
export function ImportPage({ benches, answered }: Props) {
  const fetcher = useFetcher<Reply>()
  const form = useRef<HTMLFormElement>(null)
  const reply = fetcher.data ?? answered
  const [last, setLast] = useState(hasPreview(answered) ? answered.preview : null)
  if (hasPreview(reply) && reply.preview && reply.preview !== last) setLast(reply.preview)
  const [tooLarge, setTooLarge] = useState<string | null>(null)
  const fileErrors = tooLarge ? [tooLarge] : hasPreview(reply) ? reply.fileErrors : []
  const preview = last
  const isBusy = fetcher.state !== 'idle'
  const isStoring = isBusy && fetcher.formData?.get('intent') === 'store'

  /** A file that the server would not even read is refused here; anything else is the server's to judge. */
  function refuseTooLarge(event: React.SubmitEvent<HTMLFormElement>) {
    const file = new FormData(event.currentTarget).get('file')
    const isTooLarge = file instanceof File && file.size > largestCsvBytes
    setTooLarge(isTooLarge ? tooManyBytes(file.size) : null)
    if (isTooLarge) event.preventDefault()
  }
  const lookAgain = () => form.current?.requestSubmit()

  return (
    <fetcher.Form
      ref={form}
      method="post"
      encType="multipart/form-data"
      onSubmit={refuseTooLarge}
      className="grid max-w-6xl grid-cols-[minmax(0,1fr)] gap-7 pb-10"
    >
      <header className="grid gap-1">
        <h1 className="text-xl font-bold">Import readings</h1>
        <p className="max-w-prose text-ink-soft">
          From a CSV file into a run of your own. Nothing is stored until you have seen what would be.
        </p>
      </header>
      <FileField key={preview?.digest ?? ''} preview={preview} errors={fileErrors} isBusy={isBusy} />
      {preview && (
        <div key={preview.choice.seen} className="contents" onChange={changedAtOnce(lookAgain)}>
          <input type="hidden" name="content" value={preview.content} />
          <input type="hidden" name="fileName" value={preview.fileName} />
          <input type="hidden" name="shown" value={preview.shown} />
          <input type="hidden" name="seen" value={preview.choice.seen} />
          <FieldChoice benches={benches} choice={preview.choice} />
          <Columns preview={preview} />
          <Reading preview={preview} benches={benches} />
          <Outcome
            preview={preview}
            hasChanged={hasPreview(reply) && reply.hasChanged}
            isStoring={isStoring}
          />
        </div>
      )}
      {!hasPreview(reply) && <AnswerLine reply={reply} />}
    </fetcher.Form>
  )
}

/** What is chosen is looked at as it is chosen; what is typed, when its field is left or Enter pressed. */
function changedAtOnce(lookAgain: () => void) {
  return (event: React.FormEvent) => {
    const target = event.target as HTMLElement
    const isChoice =
      target instanceof HTMLSelectElement || (target instanceof HTMLInputElement && target.type === 'radio')
    if (isChoice) lookAgain()
    else target.addEventListener('blur', lookAgain, { once: true })
  }
}
