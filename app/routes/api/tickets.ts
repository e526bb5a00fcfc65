import { data } from 'react-router'
import { may } from '../../auth/capabilities.ts'
import { readForm } from '../../auth/request-body.server.ts'
import { hasPorts, listVisibleBenches, requireVisibleBench } from '../../benches/visible-benches.server.ts'
import { makeTicket } from '../../bridge-link/ticket.server.ts'
import { databaseContext, personContext } from '../../context.ts'
import { environment } from '../../env.server.ts'
import type { Route } from './+types/tickets'

/** A ticket for the bench whose page asks, or for every bench that this person may watch and the bridge can. */
export async function action({ request, context }: Route.ActionArgs) {
  const db = context.get(databaseContext)
  const person = context.get(personContext)
  const benchId = (await readForm(request)).get('benchId')
  let benchIds: string[] | null = null
  if (typeof benchId === 'string' && benchId !== '') {
    const bench = await requireVisibleBench(db, { benchId, person })
    if (!hasPorts(bench)) throw data('This bench has no instruments to watch.', { status: 404 })
    benchIds = [bench.id]
  } else if (!may(person.role, 'watch-all-benches'))
    benchIds = (await listVisibleBenches(db, person)).filter(hasPorts).map(({ id }) => id)
  const ticket = makeTicket({ person, benchIds, secret: environment().BRIDGE_SECRET })
  return Response.json({ ticket }, { headers: { 'Cache-Control': 'no-store' } })
}
