import { data, Outlet } from 'react-router'
import { signedIn } from '../auth/guards.server.ts'
import { takeNotice } from '../benches/answer.server.ts'
import { frameRevalidation } from '../components/frame-revalidation.ts'
import type { Route } from './+types/signed-in'

export const middleware: Route.MiddlewareFunction[] = [signedIn]

// Without a loader the guard would not run on a navigation that needs no other data from the server.
export async function loader({ request }: Route.LoaderArgs) {
  const notice = await takeNotice(request)
  return notice ? data(notice.sentence, { headers: { 'Set-Cookie': notice.cookie } }) : null
}

export const shouldRevalidate = frameRevalidation

export default function SignedIn({ loaderData: notice }: Route.ComponentProps) {
  return (
    <>
      {notice && (
        <p role="status" className="border-b border-ink px-4 py-2 font-medium">
          {notice}
        </p>
      )}
      <Outlet />
    </>
  )
}
