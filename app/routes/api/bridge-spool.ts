import { readSignedBody } from '../../bridge-link/signed-request.server.ts'
import { storeBatch } from '../../bridge-link/spool.server.ts'
import { databaseContext } from '../../context.ts'
import { spoolBatchSchema } from '../../protocol/commands.ts'
import { parseMessage } from '../../protocol/messages.ts'
import type { Route } from './+types/bridge-spool'

/** Takes a numbered batch of events and summaries from the bridge, signed, and confirms how far it has all. */
export async function action({ request, context }: Route.ActionArgs) {
  const batch = parseMessage(spoolBatchSchema, await readSignedBody(request))
  if (!batch.ok) return Response.json({ reason: batch.reason }, { status: 400 })
  return Response.json(await storeBatch(context.get(databaseContext), batch.message))
}
