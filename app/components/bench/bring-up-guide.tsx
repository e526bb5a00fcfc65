import { useState } from 'react'
import { href, Link } from 'react-router'
import type { BringUpStep } from './bring-up.ts'
import { stepNames } from './bring-up.ts'

/** What to do next, and why, with the whole order one click away. */
export function BringUpGuide({ step, benchId }: { step: BringUpStep; benchId: string }) {
  const [isOpen, setOpen] = useState(false)
  return (
    <section aria-label="What to do next" className="border-l-[3px] border-ink bg-surface px-4 py-2">
      <p>
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
        className="text-[12.5px] text-ink-soft"
        onToggle={(event) => setOpen(event.currentTarget.open)}
      >
        <summary className="w-fit cursor-pointer">the whole order</summary>
        {isOpen && (
          <ol className="list-decimal pt-1 pl-6">
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
