import { data } from 'react-router'
import { ErrorPage } from '../components/error-page.tsx'
import type { Route } from './+types/not-found'

/** Every path that is no page: below the root, so that its middleware and the room light apply here as well. */
export const loader = () => {
  throw data(null, { status: 404 })
}

export default function NotFound() {
  return null
}

export function ErrorBoundary({ error }: Route.ErrorBoundaryProps) {
  return <ErrorPage error={error} />
}
