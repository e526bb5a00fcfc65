import type { Person } from '../context.ts'
import type { Database } from '../db/client.server.ts'
import type { Actor } from '../safety/types.ts'
import { hasAcknowledged } from './acknowledgements.server.ts'

/** The person as this application vouches for them to the bridge. */
export async function resolveActor(
  db: Database,
  { id, name, role }: Pick<Person, 'id' | 'name' | 'role'>,
): Promise<Actor> {
  return { personId: id, name, role, acknowledged: await hasAcknowledged(db, id) }
}
