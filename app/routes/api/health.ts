import { sql } from 'drizzle-orm'
import { databaseContext } from '../../context.ts'
import { environment } from '../../env.server.ts'
import type { Route } from './+types/health'

const bridgeMilliseconds = 1000

/** 500 when the database fails. A bridge that does not answer is named, but the pages work without it. */
export async function loader({ context }: Route.LoaderArgs) {
  const [database, bridge] = await Promise.all([
    answers(context.get(databaseContext).run(sql`select 1`)),
    answers(
      fetch(new URL('/health', environment().BRIDGE_URL), {
        signal: AbortSignal.timeout(bridgeMilliseconds),
      }).then((response) => {
        if (!response.ok) throw new Error(`The bridge answered ${response.status}`)
      }),
    ),
  ])
  return Response.json(
    { database, bridge },
    { status: database === 'answers' ? 200 : 500, headers: { 'Cache-Control': 'no-store' } },
  )
}

const answers = (question: Promise<unknown>) =>
  question.then(
    () => 'answers' as const,
    () => 'does not answer' as const,
  )
