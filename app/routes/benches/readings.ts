import { data, href, redirect } from 'react-router'
import { answerAlways } from '../../benches/answer-always.ts'
import { databaseContext, personContext } from '../../context.ts'
import { captureReading } from '../../runs/capture.server.ts'
import type { Route } from './+types/readings'

export const loader = ({ params }: Route.LoaderArgs) =>
  redirect(href('/benches/:benchId', { benchId: params.benchId }))

export async function action({ params, context }: Route.ActionArgs) {
  const { status, reply } = await captureReading(context.get(databaseContext), {
    benchId: params.benchId,
    person: context.get(personContext),
  })
  return data(reply, { status })
}

export const clientAction = ({ serverAction }: Route.ClientActionArgs) => answerAlways({ serverAction })
