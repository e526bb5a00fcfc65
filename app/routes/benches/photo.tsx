import { answer } from '../../benches/answer.server.ts'
import { answerAlways } from '../../benches/answer-always.ts'
import { photoPath } from '../../benches/bench-path.ts'
import { BenchFrame } from '../../components/bench-frame.tsx'
import { PhotoPage } from '../../components/photo/photo-page.tsx'
import { databaseContext, personContext } from '../../context.ts'
import { addPhoto } from '../../runs/photo.server.ts'
import { loadPhotoView } from '../../runs/photo-view.server.ts'
import type { Route } from './+types/photo'

export function loader({ request, params, context }: Route.LoaderArgs) {
  return loadPhotoView(context.get(databaseContext), {
    ...params,
    photoId: new URL(request.url).searchParams.get('photo'),
    person: context.get(personContext),
  })
}

export async function action({ request, params, context }: Route.ActionArgs) {
  const answered = await addPhoto(context.get(databaseContext), {
    ...params,
    person: context.get(personContext),
    request,
  })
  return answer(request, answered, photoPath(params))
}

export const clientAction = ({ serverAction }: Route.ClientActionArgs) => answerAlways({ serverAction })

export default function Photo({ loaderData: view, actionData }: Route.ComponentProps) {
  return (
    <BenchFrame bench={view.bench} person={view.person}>
      <title>{`Photo of reading ${view.reading.number} · ${view.bench.name} · Coilside`}</title>
      <PhotoPage view={view} reply={actionData} />
    </BenchFrame>
  )
}
