import { data, href, redirect } from 'react-router'
import { readForm } from '../../auth/request-body.server.ts'
import { answerAlways } from '../../benches/answer-always.ts'
import { databaseContext, personContext } from '../../context.ts'
import { enterEdges } from '../../runs/edges.server.ts'
import type { Route } from './+types/edges'

export const loader = ({ params }: Route.LoaderArgs) =>
  redirect(href('/benches/:benchId', { benchId: params.benchId }))

export async function action({ request, params, context }: Route.ActionArgs) {
  const { status, reply } = await enterEdges(context.get(databaseContext), {
    ...params,
    person: context.get(personContext),
    form: await readForm(request),
  })
  return data(reply, { status })
}

export const clientAction = ({ serverAction }: Route.ClientActionArgs) => answerAlways({ serverAction })
