import { useState } from 'react'
import { href, Link } from 'react-router'

type Props = {
  /** The first of the order leads to the cautions. */
  step: { index: number; name: string; why: string }
  order: readonly string[]
  benchId: string
}

/** What to do next, and why, with the whole order one click away. */
export function BringUpGuide({ step, order, benchId }: Props) {
  return (
    <section
      aria-label="What to do next"
      className="flex min-w-0 items-baseline gap-x-3 border-l-[3px] border-ink bg-surface px-4 py-1.5 max-xl:w-full max-sm:flex-wrap xl:flex-1"
    >
      <WholeOrder current={step.index} order={order} />
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

function WholeOrder({ current, order }: { current: number; order: readonly string[] }) {
  const [isOpen, setOpen] = useState(false)
  return (
    <details
      className="relative shrink-0 text-ink-soft"
      onToggle={(event) => setOpen(event.currentTarget.open)}
    >
      <summary className="w-fit cursor-pointer touch:py-3">
        {current + 1} of {order.length}
        <span className="sr-only">: the whole order</span>
      </summary>
      {isOpen && (
        <ol className="absolute z-20 mt-2 w-max list-decimal border border-edge bg-surface py-2 pr-4 pl-9 text-[12.5px]">
          {order.map((name, index) => (
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
