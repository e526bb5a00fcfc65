import { href, redirect } from 'react-router'
import { readForm } from '../../auth/request-body.server.ts'
import { answer } from '../../benches/answer.server.ts'
import { databaseContext, personContext } from '../../context.ts'
import { addPlanned, removePlanned } from '../../runs/plan.server.ts'
import type { Route } from './+types/plan'

const page = (params: { runId: string }) => href('/runs/:runId/analysis', params)

export const loader = ({ params }: Route.LoaderArgs) => redirect(page(params))

export async function action({ request, params, context }: Route.ActionArgs) {
  const form = await readForm(request)
  const change = form.get('intent') === 'remove' ? removePlanned : addPlanned
  const answered = await change(context.get(databaseContext), {
    ...params,
    person: context.get(personContext),
    form,
  })
  return answer(request, answered, page(params))
}
