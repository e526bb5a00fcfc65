import { isRouteErrorResponse, Link } from 'react-router'

/** What happened, what it means for the bench, and where to go. The bridge holds the benches whatever this page does. */
export function ErrorPage({ error }: { error: unknown }) {
  const [title, sentence] = describe(error)
  return (
    <main className="mx-auto grid max-w-xl gap-4 p-6 pt-24">
      <title>{`${title} · Coilside`}</title>
      <h1 className="text-2xl font-bold">{title}</h1>
      <p>{sentence}</p>
      <p className="text-ink-soft">
        The bridge keeps its limits and interlocks whatever this page shows. A voltage that was on may still
        be on: treat the bench as live until you have measured it.
      </p>
      <p>
        <Link to="/" className="button">
          To the hall
        </Link>
      </p>
    </main>
  )
}

function describe(error: unknown): [title: string, sentence: string] {
  if (!isRouteErrorResponse(error))
    return [
      'This page failed',
      'Something went wrong in the web application. Reload the page; what was stored is kept.',
    ]
  const words = typeof error.data === 'string' && error.data ? error.data : null
  if (error.status === 404) return ['Not found', words ?? 'There is no such page, or it is not one of yours.']
  if (error.status === 403) return ['Not allowed', words ?? 'Your role does not allow this.']
  if (error.status === 401) return ['Sign in first', words ?? 'The session has ended.']
  return ['This did not work', words ?? `The web application answered ${error.status}. Reload the page.`]
}
