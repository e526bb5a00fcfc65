import { Links, Meta, Outlet, Scripts, ScrollRestoration } from 'react-router'
import type { Route } from './+types/root'
import './app.css'
import { limitBody } from './auth/request-body.server.ts'
import { readRoomLight } from './auth/room-light.server.ts'
import { sameOrigin } from './auth/same-origin.server.ts'
import { securityHeaders } from './auth/security-headers.server.ts'
import { getPerson } from './auth/sessions.server.ts'
import { bridgeSocketUrl } from './auth/socket-url.server.ts'
import { ErrorPage } from './components/error-page.tsx'
import { frameRevalidation } from './components/frame-revalidation.ts'
import { databaseContext } from './context.ts'
import { siteDatabase } from './db/site.server.ts'

export const middleware: Route.MiddlewareFunction[] = [
  securityHeaders,
  sameOrigin,
  limitBody,
  async ({ context }, next) => {
    context.set(databaseContext, await siteDatabase())
    return next()
  },
]

export async function loader({ request, context }: Route.LoaderArgs) {
  const person = await getPerson(context.get(databaseContext), request)
  return {
    person: person && { id: person.id, name: person.name, role: person.role },
    roomLight: person?.roomLight ?? (await readRoomLight(request)),
    socketUrl: bridgeSocketUrl(request),
  }
}

export const shouldRevalidate = frameRevalidation

export default function App({ loaderData }: Route.ComponentProps) {
  return (
    <Page roomLight={loaderData.roomLight}>
      <Outlet />
    </Page>
  )
}

/** The whole document. The room light stands on the root element before the first paint, so there is no flash. */
function Page({ roomLight, children }: { roomLight: 'lit' | 'dark'; children: React.ReactNode }) {
  return (
    <html lang="en" data-light={roomLight}>
      <head>
        <meta charSet="utf-8" />
        <meta name="viewport" content="width=device-width, initial-scale=1" />
        <link rel="icon" href="/favicon.svg" type="image/svg+xml" />
        <Meta />
        <Links />
      </head>
      <body>
        {children}
        <ScrollRestoration />
        <Scripts />
      </body>
    </html>
  )
}

export function ErrorBoundary({ error, loaderData }: Route.ErrorBoundaryProps) {
  return (
    <Page roomLight={loaderData?.roomLight ?? 'lit'}>
      <ErrorPage error={error} />
    </Page>
  )
}
