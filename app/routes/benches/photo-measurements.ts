import { redirect } from 'react-router'
import { readForm } from '../../auth/request-body.server.ts'
import { answer } from '../../benches/answer.server.ts'
import { answerAlways } from '../../benches/answer-always.ts'
import { photoPath } from '../../benches/bench-path.ts'
import { databaseContext, personContext } from '../../context.ts'
import { measurePhotoOf } from '../../runs/photo-measurement.server.ts'
import type { Route } from './+types/photo-measurements'

export const loader = ({ params }: Route.LoaderArgs) => redirect(photoPath(params))

export async function action({ request, params, context }: Route.ActionArgs) {
  const answered = await measurePhotoOf(context.get(databaseContext), {
    ...params,
    person: context.get(personContext),
    form: await readForm(request),
  })
  return answer(request, answered, photoPath(params))
}

export const clientAction = ({ serverAction }: Route.ClientActionArgs) => answerAlways({ serverAction })
