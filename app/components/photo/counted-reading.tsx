import type { PhotoView } from '#app/runs/photo-view.server.ts'
import { fixed, thinSpace, withUncertainty } from '../figures.ts'

const centimetres = (metres: number) => fixed(metres * 100, 2)

/** What counts for the reading now: of each person the newest of edges and photo, and the e/m that follows. */
export function CountedReading({ view }: { view: PhotoView }) {
  const { reading, isVirtual } = view
  const { edges, photos, result } = reading
  if (edges.length + photos.length === 0) return null
  return (
    <section aria-label="What counts for this reading" className="grid gap-1 border-t border-rule pt-4">
      <h2 className="font-medium">What counts for this reading</h2>
      <ul className="text-ink-soft">
        {edges.map(({ personId, name, leftMetres, rightMetres }) => (
          <li key={personId}>
            {name}: edges {centimetres(leftMetres)} to {centimetres(rightMetres)}
            {thinSpace}cm
          </li>
        ))}
        {photos.map(({ personId, name, diameterMetres, uCircleMetres, uScaleMetres }) => (
          <li key={personId}>
            {name}: photo,{' '}
            {withUncertainty(diameterMetres * 100, Math.hypot(uCircleMetres, uScaleMetres) * 100)}
            {thinSpace}cm on the scale
          </li>
        ))}
      </ul>
      {reading.struck ? null : result ? (
        <p>
          d = {centimetres(result.diameterMetres)}
          {thinSpace}cm, e/m ={' '}
          <b className={`whitespace-nowrap text-beam ${isVirtual ? '' : 'dark:text-ink'}`}>
            {withUncertainty(result.chargeToMass / 1e11, result.standardUncertainty / 1e11)} × 10¹¹{thinSpace}
            C/kg
          </b>
        </p>
      ) : (
        <p>
          No orbit of this bench has this diameter at this voltage and current, so there is no e/m. Look
          whether each scale mark has its own number.
        </p>
      )}
    </section>
  )
}
