import { useId } from 'react'
import type { ImportPreview } from '#app/imports/import-view.ts'

type Props = { preview: ImportPreview | null; errors: string[]; isBusy: boolean }

/** The file: chosen, or the one that is being looked at and how another takes its place. */
export function FileField({ preview, errors, isBusy }: Props) {
  const id = useId()
  return (
    <section aria-label="File" className="grid gap-2">
      {preview && (
        <p className="wrap-anywhere">
          <b className="font-medium">{preview.fileName}</b>{' '}
          <span className="text-ink-soft">
            {preview.bytes.toLocaleString('en')} bytes, SHA-256 {preview.digest.slice(0, 12)}…
          </span>
        </p>
      )}
      <label htmlFor={id} className={preview ? 'text-ink-soft' : 'font-medium'}>
        {preview ? 'Another file in its place' : 'CSV file with readings'}
      </label>
      <div className="flex flex-wrap items-center gap-3">
        <input
          id={id}
          type="file"
          name="file"
          accept=".csv,.tsv,.txt,text/csv,text/plain"
          aria-invalid={errors.length > 0 || undefined}
          aria-describedby={`${id}-hint${errors.length > 0 ? ` ${id}-error` : ''}`}
          className="min-h-10 max-w-full border-0 bg-transparent file:mr-3 file:min-h-9 file:cursor-pointer file:rounded-sm file:border file:border-solid file:border-ink file:bg-transparent file:px-3 file:font-medium file:text-ink touch:min-h-12 touch:file:min-h-12"
        />
        <button
          type="submit"
          name="intent"
          value="look"
          disabled={isBusy}
          className={`button ${preview ? '' : 'button-main'}`}
        >
          Look at the file
        </button>
      </div>
      <p id={`${id}-hint`} className="max-w-prose text-[12.5px] text-ink-soft">
        Voltage, current, and a diameter, a radius, two edges or a rung in columns; one reading a row.
      </p>
      <div id={`${id}-error`} role="alert">
        {errors.map((error) => (
          <p key={error} className="font-medium text-trip">
            {error}
          </p>
        ))}
      </div>
    </section>
  )
}
