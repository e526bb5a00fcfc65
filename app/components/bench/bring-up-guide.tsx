import { useState } from 'react'
import { href, Link } from 'react-router'
import type { BringUpStep } from './bring-up.ts'
import { stepNames } from './bring-up.ts'

/** What to do next, and why, with the whole order one click away. */
export function BringUpGuide({ step, benchId }: { step: BringUpStep; benchId: string }) {
  return (
    <section
      aria-label="What to do next"
      className="flex min-w-0 items-baseline gap-x-3 border-l-[3px] border-ink bg-surface px-4 py-1.5 max-xl:w-full max-sm:flex-wrap xl:flex-1"
    >
      <WholeOrder current={step.index} />
      <p className="min-w-0 max-sm:w-full">
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
    </section>
  )
}

function WholeOrder({ current }: { current: number }) {
  const [isOpen, setOpen] = useState(false)
  return (
    <details
      className="relative shrink-0 text-ink-soft"
      onToggle={(event) => setOpen(event.currentTarget.open)}
    >
      <summary className="w-fit cursor-pointer touch:py-3">
        {current + 1} of {stepNames.length}
        <span className="sr-only">: the whole order</span>
      </summary>
      {isOpen && (
        <ol className="absolute z-20 mt-2 w-max list-decimal border border-edge bg-surface py-2 pr-4 pl-9 text-[12.5px]">
          {stepNames.map((name, index) => (
            <li
              key={name}
              aria-current={index === current ? 'step' : undefined}
              className="aria-[current]:text-ink"
            >
              {name}
            </li>
          ))}
        </ol>
      )}
    </details>
  )
}
