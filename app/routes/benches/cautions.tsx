import { Form, href, Link, redirect, useNavigation } from 'react-router'
import { acknowledgeCautions, hasAcknowledged } from '../../benches/acknowledgements.server.ts'
import { cautions, cautionsLimits, termOf } from '../../benches/cautions.ts'
import { requireVisibleBench, toFramed } from '../../benches/visible-benches.server.ts'
import { BenchFrame } from '../../components/bench-frame.tsx'
import { databaseContext, personContext } from '../../context.ts'
import type { Route } from './+types/cautions'

export async function loader({ params, context }: Route.LoaderArgs) {
  const db = context.get(databaseContext)
  const person = context.get(personContext)
  const bench = await requireVisibleBench(db, { benchId: params.benchId, person })
  return {
    bench: toFramed(bench),
    person: { id: person.id, role: person.role },
    isAcknowledged: await hasAcknowledged(db, person.id),
    term: termOf(new Date()),
  }
}

export async function action({ params, context }: Route.ActionArgs) {
  const db = context.get(databaseContext)
  const person = context.get(personContext)
  const bench = await requireVisibleBench(db, { benchId: params.benchId, person })
  await acknowledgeCautions(db, { personId: person.id })
  return redirect(href('/benches/:benchId', { benchId: bench.id }))
}

export default function Cautions({ loaderData }: Route.ComponentProps) {
  const { bench, person, isAcknowledged, term } = loaderData
  const isBusy = useNavigation().state !== 'idle'
  const benchPage = href('/benches/:benchId', { benchId: bench.id })

  return (
    <BenchFrame bench={bench} person={person}>
      <title>{`Cautions · ${bench.name} · Coilside`}</title>
      <div className="mx-auto grid max-w-2xl gap-6 pb-10">
        <h1 className="text-2xl font-bold">Before you take the controls</h1>
        <ol className="border-t border-rule">
          {cautions.map(({ title, text }, index) => (
            <li key={title} className="grid grid-cols-[2.5ch_1fr] gap-x-4 border-b border-rule py-4">
              <span aria-hidden className="font-bold text-ink-soft">
                {index + 1}
              </span>
              <div className="grid gap-1">
                <h2 className="font-medium">{title}</h2>
                <p className="text-ink-soft">{text}</p>
              </div>
            </li>
          ))}
        </ol>
        <div className="grid grid-cols-[14px_1fr] gap-x-4">
          <span aria-hidden className="hatch border-l-4 border-caution" />
          <p className="py-1 font-medium">{cautionsLimits}</p>
        </div>
        {isAcknowledged ? (
          <p role="status" className="flex flex-wrap items-center gap-x-5 gap-y-3">
            <span>You have acknowledged these for {term}.</span>
            <Link to={benchPage} className="button">
              Back to {bench.name}
            </Link>
          </p>
        ) : (
          <Form method="post" className="grid gap-3">
            <button type="submit" className="button button-main justify-self-start" disabled={isBusy}>
              I have read these and will keep to them
            </button>
            <p className="text-ink-soft">Noted with your name and the time; asked again next term.</p>
          </Form>
        )}
      </div>
    </BenchFrame>
  )
}
