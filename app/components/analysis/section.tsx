/** One part of the analysis under its heading. */
export function Section({ id, title, children }: { id: string; title: string; children: React.ReactNode }) {
  return (
    <section
      aria-labelledby={id}
      className="grid min-w-0 grid-cols-1 content-start gap-3 border-t border-ink pt-3"
    >
      <h2 id={id} className="text-[17px] font-bold">
        {title}
      </h2>
      {children}
    </section>
  )
}

/** A table that scrolls within itself where the screen is narrow. */
export function ScrollTable({ label, children }: { label: string; children: React.ReactNode }) {
  return (
    // biome-ignore lint/a11y/noNoninteractiveTabindex: what scrolls must be reached by keyboard
    <section aria-label={label} tabIndex={0} className="min-w-0 overflow-x-auto">
      <table className="w-full border-collapse text-right whitespace-nowrap">{children}</table>
    </section>
  )
}

export function Heads({ names }: { names: readonly string[] }) {
  return (
    <thead>
      <tr className="border-b border-ink text-[12.5px] text-ink-soft">
        {names.map((name, index) => (
          <th
            key={name}
            scope="col"
            className={`py-1.5 font-normal ${index === 0 ? 'pr-2 text-left' : 'px-2'}`}
          >
            {name}
          </th>
        ))}
      </tr>
    </thead>
  )
}
