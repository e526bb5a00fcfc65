import { useState } from 'react'
import { href, Link } from 'react-router'
import type { BringUpStep } from './bring-up.ts'
import { stepNames } from './bring-up.ts'

/** What to do next, and why, with the whole order one click away. */
export function BringUpGuide({ step, benchId }: { step: BringUpStep; benchId: string }) {
  const [isOpen, setOpen] = useState(false)
  return (
    <section
      aria-label="What to do next"
      className="flex min-w-0 flex-wrap items-center gap-x-4 border-l-[3px] border-ink bg-surface px-4 py-1.5 max-xl:w-full xl:flex-1 xl:flex-nowrap xl:justify-between"
    >
      <p className="min-w-0">
        <span className="text-ink-soft">
          {step.index + 1} of {stepNames.length}{' '}
        </span>
        <b>
          {step.index === 0 ? (
            <Link to={href('/benches/:benchId/cautions', { benchId })} className="link">
              {step.name}
            </Link>
          ) : (
            step.name
          )}
          .
        </b>{' '}
        {step.why}
      </p>
      <details
        className="relative shrink-0 text-[12.5px] text-ink-soft"
        onToggle={(event) => setOpen(event.currentTarget.open)}
      >
        <summary className="w-fit cursor-pointer touch:py-3">the whole order</summary>
        {isOpen && (
          <ol className="absolute z-20 mt-2 w-max list-decimal border border-edge bg-surface py-2 pr-4 pl-9">
            {stepNames.map((name, index) => (
              <li
                key={name}
                aria-current={index === step.index ? 'step' : undefined}
                className="aria-[current]:text-ink"
              >
                {name}
              </li>
            ))}
          </ol>
        )}
      </details>
    </section>
  )
}
