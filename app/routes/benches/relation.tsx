import { data } from 'react-router'
import { readForm } from '../../auth/request-body.server.ts'
import { answerAlways } from '../../benches/answer-always.ts'
import { BenchFrame } from '../../components/bench-frame.tsx'
import { RelationPage } from '../../components/relation/relation-page.tsx'
import { databaseContext, personContext } from '../../context.ts'
import { checkOwnRelation, loadRelation } from '../../runs/relation.server.ts'
import type { Route } from './+types/relation'

export async function loader({ params, context }: Route.LoaderArgs) {
  const person = context.get(personContext)
  const view = await loadRelation(context.get(databaseContext), { ...params, person })
  return { view, person: { id: person.id, role: person.role } }
}

export async function action({ request, params, context }: Route.ActionArgs) {
  const { status, reply } = await checkOwnRelation(context.get(databaseContext), {
    ...params,
    person: context.get(personContext),
    form: await readForm(request),
  })
  return data(reply, { status })
}

export const clientAction = ({ serverAction }: Route.ClientActionArgs) => answerAlways({ serverAction })

export default function Relation({ loaderData: { view, person }, actionData }: Route.ComponentProps) {
  return (
    <BenchFrame bench={view.bench} person={person}>
      <title>{`Relation · ${view.bench.name} · Coilside`}</title>
      <RelationPage view={view} answered={actionData} />
    </BenchFrame>
  )
}
