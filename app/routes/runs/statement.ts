import { href, redirect } from 'react-router'
import { readForm } from '../../auth/request-body.server.ts'
import { answer } from '../../benches/answer.server.ts'
import { databaseContext, personContext } from '../../context.ts'
import { stateFit } from '../../runs/statement.server.ts'
import type { Route } from './+types/statement'

const page = (params: { runId: string }) => href('/runs/:runId/analysis', params)

export const loader = ({ params }: Route.LoaderArgs) => redirect(page(params))

export async function action({ request, params, context }: Route.ActionArgs) {
  const answered = await stateFit(context.get(databaseContext), {
    ...params,
    person: context.get(personContext),
    form: await readForm(request),
  })
  return answer(request, answered, page(params))
}
