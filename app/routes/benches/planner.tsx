import { Form, href, Link, useFetcher } from 'react-router'
import * as z from 'zod'
import type { ActionReply } from '../../benches/action-reply.ts'
import { estimate, percent } from '../../components/analysis/figures.ts'
import { Heads, ScrollTable } from '../../components/analysis/section.tsx'
import { AnswerLine } from '../../components/answer-line.tsx'
import { BenchFrame } from '../../components/bench-frame.tsx'
import { SettingMap } from '../../components/planner/setting-map.tsx'
import { databaseContext, personContext } from '../../context.ts'
import { loadPlanner } from '../../runs/planner.server.ts'
import type { PlannerView } from '../../runs/planner-view.ts'
import type { Route } from './+types/planner'

const askedSchema = z.object({
  count: z.coerce.number().int().min(1).max(20).catch(8),
  criterion: z.enum(['all', 'charge-to-mass']).catch('all'),
})

export async function loader({ request, params, context }: Route.LoaderArgs) {
  const person = context.get(personContext)
  const asked = askedSchema.parse(Object.fromEntries(new URL(request.url).searchParams))
  const view = await loadPlanner(context.get(databaseContext), { ...params, person, ...asked })
  return { view, person: { id: person.id, role: person.role } }
}

export default function Planner({ loaderData: { view, person } }: Route.ComponentProps) {
  const { bench, map, valueFrom } = view
  return (
    <BenchFrame bench={bench} person={person}>
      <title>{`Planner · ${bench.name} · Coilside`}</title>
      <div className="grid max-w-7xl grid-cols-1 gap-5">
        <h1 className="text-xl font-bold">Planner for {bench.name}</h1>
        {map ? (
          <>
            <p className="max-w-prose text-ink-soft">
              {valueFrom === 'accepted'
                ? 'The orbits are predicted with the accepted value of e/m: not for the eyes of a class before its reveal.'
                : 'The orbits are predicted with the value of e/m that this run states, and are as uncertain as it.'}{' '}
              Glass: the beam would touch it. Faint: below about 100 V most beams are too faint to read
              (common practice).
            </p>
            <Ask view={view} />
            <div className="flex flex-wrap gap-6">
              {map.map((one) => (
                <SettingMap key={one.polarity} map={one} />
              ))}
            </div>
            <Chosen view={view} />
          </>
        ) : (
          <p className="max-w-prose">
            Nothing can be predicted yet: an orbit follows from e/m, and this run states none. Take a first
            reading and read its edges; its own value is enough to plan with.{' '}
            <Link to={href('/benches/:benchId', { benchId: bench.id })} className="link">
              To the bench
            </Link>
          </p>
        )}
      </div>
    </BenchFrame>
  )
}

function Ask({ view: { count, criterion } }: { view: PlannerView }) {
  return (
    <Form className="flex flex-wrap items-end gap-4" preventScrollReset>
      <label className="grid gap-1">
        <span className="text-[12.5px] text-ink-soft">readings</span>
        <input
          type="number"
          name="count"
          min={1}
          max={20}
          key={count}
          defaultValue={count}
          className="min-h-9 w-24 px-2 touch:min-h-12"
        />
      </label>
      <label className="grid gap-1">
        <span className="text-[12.5px] text-ink-soft">chosen to tell the most of</span>
        <select
          name="criterion"
          key={criterion}
          defaultValue={criterion}
          className="min-h-9 px-2 touch:min-h-12"
        >
          <option value="all">e/m, stray field and offsets together</option>
          <option value="charge-to-mass">e/m alone</option>
        </select>
      </label>
      <button type="submit" className="button">
        Choose
      </button>
    </Form>
  )
}

function Chosen({ view }: { view: PlannerView }) {
  const { chosen, outlook, runId, planned } = view
  const fetcher = useFetcher<ActionReply>()
  if (chosen.length === 0 || !outlook)
    return <p>No setting of this bench can be set and read: see the map for the reason of each.</p>
  return (
    <section aria-label="The plan" className="grid grid-cols-1 gap-3">
      <ScrollTable label="Chosen settings">
        <Heads names={['setting', 'times', 'diameter cm', 'evenness', 'one reading alone']} />
        <tbody>
          {chosen.map((it) => (
            <tr key={`${it.anodeVolts} ${it.coilAmps} ${it.polarity}`} className="border-b border-rule">
              <th scope="row" className="py-1 pr-2 text-left font-normal">
                {it.anodeVolts} V, {it.coilAmps.toFixed(2)} A{it.polarity === -1 && ', reversed'}
              </th>
              <td className="px-2">{it.times}</td>
              <td className="px-2">
                {estimate({ value: it.radiusMetres * 200, standardUncertainty: it.uRadiusMetres * 200 })}
              </td>
              <td className="px-2">{it.evenness.toFixed(4)}</td>
              <td className="px-2">{percent(it.relativeUncertainty)}</td>
            </tr>
          ))}
        </tbody>
      </ScrollTable>
      <p className="max-w-prose">
        Such a series would know e/m to {percent(outlook.relativeUncertainty)} by its own parts, with stray
        field and offsets left open as the bench’s data leave them.
      </p>
      <ul className="grid max-w-prose list-disc gap-1 pl-5 text-ink-soft">
        {outlook.effects.map(({ name, unit, standardUncertainty, told }) => (
          <li key={name}>
            {`It would know the ${name} to ${standardUncertainty.toPrecision(2)} ${unit}: ${toldWords(told)}.`}
          </li>
        ))}
      </ul>
      {runId ? (
        <fetcher.Form
          method="post"
          action={href('/runs/:runId/plan', { runId })}
          className="flex flex-wrap items-center gap-3"
        >
          <input type="hidden" name="intent" value="add" />
          {chosen.map((it) => (
            <span key={`${it.anodeVolts} ${it.coilAmps} ${it.polarity}`}>
              <input type="hidden" name="anodeVolts" value={it.anodeVolts} />
              <input type="hidden" name="coilAmps" value={it.coilAmps} />
              <input type="hidden" name="polarity" value={it.polarity} />
            </span>
          ))}
          <button type="submit" className="button button-main" disabled={fetcher.state !== 'idle'}>
            Take into the plan of the open run
          </button>
          {planned.length > 0 && (
            <Link to={href('/runs/:runId/analysis', { runId })} className="link-alone">
              {planned.length} planned
            </Link>
          )}
          <AnswerLine reply={fetcher.data} className="text-[12.5px] text-ink-soft" />
        </fetcher.Form>
      ) : (
        <p className="text-ink-soft">
          There is no open run: begin one at the bench to take these into its plan.
        </p>
      )}
    </section>
  )
}

function toldWords(told: number): string {
  if (told > 0.75) return 'the plan sees it'
  return told > 0.25
    ? 'the plan sees part of it'
    : 'the plan hardly sees it, and takes it as the bench’s data have it'
}
