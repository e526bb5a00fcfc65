import { listConfigurations } from '../../benches/configurations.server.ts'
import { readSignedBody } from '../../bridge-link/signed-request.server.ts'
import { databaseContext } from '../../context.ts'
import type { Route } from './+types/bridge-configuration'

/** Asked by the bridge at its start, signed. */
export async function loader({ request, context }: Route.LoaderArgs) {
  await readSignedBody(request)
  return Response.json(
    { benches: await listConfigurations(context.get(databaseContext)) },
    { headers: { 'Cache-Control': 'no-store' } },
  )
}
