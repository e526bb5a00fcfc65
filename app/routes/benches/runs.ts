import { redirect } from 'react-router'
import { done } from '../../benches/action-reply.ts'
import { answer } from '../../benches/answer.server.ts'
import { answerAlways } from '../../benches/answer-always.ts'
import { benchPath } from '../../benches/bench-path.ts'
import { requireVisibleBench } from '../../benches/visible-benches.server.ts'
import { databaseContext, personContext } from '../../context.ts'
import { startRun } from '../../runs/runs.server.ts'
import type { Route } from './+types/runs'

export const loader = ({ params }: Route.LoaderArgs) => redirect(benchPath(params))

export async function action({ request, params, context }: Route.ActionArgs) {
  const db = context.get(databaseContext)
  const person = context.get(personContext)
  const bench = await requireVisibleBench(db, { benchId: params.benchId, person })
  await startRun(db, { benchId: bench.id, personId: person.id })
  const reply = done('A new run is begun. The readings before it are kept.')
  return answer(request, { status: 200, reply }, benchPath(params))
}

export const clientAction = ({ serverAction }: Route.ClientActionArgs) => answerAlways({ serverAction })
