import { useId } from 'react'

/** One part of the import, with its heading. */
export function ImportSection({ title, children }: { title: string; children: React.ReactNode }) {
  const id = useId()
  return (
    <section aria-labelledby={id} className="grid grid-cols-[minmax(0,1fr)] gap-3">
      <h2 id={id} className="border-b border-ink pb-1 font-medium">
        {title}
      </h2>
      {children}
    </section>
  )
}
