import { redirect } from 'react-router'
import { readForm } from '../../auth/request-body.server.ts'
import { answer } from '../../benches/answer.server.ts'
import { answerAlways } from '../../benches/answer-always.ts'
import { benchPath } from '../../benches/bench-path.ts'
import { databaseContext, personContext } from '../../context.ts'
import { typeReading } from '../../runs/typed.server.ts'
import type { Route } from './+types/typed-readings'

export const loader = ({ params }: Route.LoaderArgs) => redirect(benchPath(params))

export async function action({ request, params, context }: Route.ActionArgs) {
  const answered = await typeReading(context.get(databaseContext), {
    benchId: params.benchId,
    person: context.get(personContext),
    form: await readForm(request),
  })
  return answer(request, answered, benchPath(params))
}

export const clientAction = ({ serverAction }: Route.ClientActionArgs) => answerAlways({ serverAction })
