import { data, redirect } from 'react-router'
import { requireCapability } from '../../auth/guards.server.ts'
import { answerAlways } from '../../benches/answer-always.ts'
import { ImportPage } from '../../components/import/import-page.tsx'
import { PageFrame } from '../../components/page-frame.tsx'
import { RunsLink } from '../../components/runs-link.tsx'
import { databaseContext, personContext } from '../../context.ts'
import { importReadings, listImportBenches } from '../../imports/import.server.ts'
import type { Route } from './+types/import'

export const middleware: Route.MiddlewareFunction[] = [requireCapability('import-readings')]

export async function loader({ context }: Route.LoaderArgs) {
  return { benches: await listImportBenches(context.get(databaseContext), context.get(personContext)) }
}

export async function action({ request, context }: Route.ActionArgs) {
  const person = context.get(personContext)
  const step = await importReadings(context.get(databaseContext), { person, request })
  if ('runId' in step) throw redirect(`/runs/${step.runId}/imported`)
  return data(step.reply, { status: step.status })
}

export const clientAction = ({ serverAction }: Route.ClientActionArgs) => answerAlways({ serverAction })

export default function Import({ loaderData, actionData }: Route.ComponentProps) {
  return (
    <PageFrame where={<RunsLink />}>
      <title>Import readings · Coilside</title>
      <ImportPage benches={loaderData.benches} answered={actionData} />
    </PageFrame>
  )
}
