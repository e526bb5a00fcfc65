import type { Picture } from '#app/protocol/messages.ts'
import { pathOf, type TubeGeometry } from './tube-geometry.ts'

type Props = {
  geometry: TubeGeometry
  picture: Picture | null
  /** The id of the blur. Without one the beam alone is drawn, without gun and halo: for the enlargement. */
  blurId: string | null
}

/** Glass, gun and beam, in millimetres. The bright line is as wide as the glow is: its outer side is the outer edge. */
export function TubeScene({ geometry, picture, blurId }: Props) {
  const { bulbRadius, gun } = geometry
  const path = picture && picture.points.length > 1 ? pathOf(picture.points) : null
  return (
    <g fill="none">
      <circle r={bulbRadius} className="stroke-rule" strokeWidth="0.7" />
      {path && picture && (
        <g strokeLinejoin="round" opacity={0.35 + 0.65 * Math.min(1, picture.brightness)}>
          {blurId && (
            <path
              d={path}
              className="stroke-glow"
              strokeWidth={picture.widthMillimetres * 3}
              opacity="0.42"
              filter={`url(#${blurId})`}
            />
          )}
          <path d={path} className="stroke-beam" strokeWidth={picture.widthMillimetres} data-beam="" />
        </g>
      )}
      {blurId && (
        <path
          d={`M${gun.x - 4} ${-gun.y + 10}v-9h8v9zM${gun.x} ${-gun.y + 10}V${bulbRadius + 2}`}
          className="fill-glass stroke-ink-soft"
          strokeWidth="0.6"
        />
      )}
    </g>
  )
}

/** The scale with its marks at the configured places, and above it the edges that this person has entered. */
export function TubeScale({ geometry, edges }: { geometry: TubeGeometry; edges: number[] }) {
  const { y, zero, length, marks } = geometry.scale
  return (
    <g className="fill-ink-soft stroke-ink-soft" strokeWidth="0.4">
      <path
        d={`M${zero} ${-y}h${length}${marks.map(({ x, length: tall }) => `M${x} ${-y}v${tall}`).join('')}`}
        fill="none"
      />
      {marks.map(
        ({ x, label }) =>
          label && (
            <text key={x} x={x} y={-y + 10.5} fontSize="4.6" textAnchor="middle" stroke="none">
              {label}
            </text>
          ),
      )}
      {edges.map((x) => (
        <path key={x} d={`M${x} ${-y - 0.6}l-1.4 -2.6h2.8z`} className="fill-ink" stroke="none" />
      ))}
    </g>
  )
}
