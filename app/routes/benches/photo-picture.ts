import { data } from 'react-router'
import { databaseContext, personContext } from '../../context.ts'
import { openPhoto } from '../../files/photo-files.server.ts'
import { requireVisiblePhoto } from '../../runs/photo.server.ts'
import type { Route } from './+types/photo-picture'

/** The picture itself, for those who may see its reading. What is kept is always JPEG, whatever was sent. */
export async function loader({ params, context }: Route.LoaderArgs) {
  const photo = await requireVisiblePhoto(context.get(databaseContext), {
    ...params,
    person: context.get(personContext),
  })
  const bytes = await openPhoto(photo.id)
  if (!bytes) throw data('The file of this photo is not in its place. Tell the technician.', { status: 404 })
  return new Response(bytes, {
    headers: {
      'Content-Type': 'image/jpeg',
      'Content-Length': String(photo.bytes),
      'Content-Disposition': `inline; filename="${photo.id}.jpg"`,
      'X-Content-Type-Options': 'nosniff',
      'Cross-Origin-Resource-Policy': 'same-origin',
      // Also not by this browser: many share the computer.
      'Cache-Control': 'private, no-store',
    },
  })
}
