import { useId, useMemo, useState } from 'react'
import type { CommissionedBench } from '#app/protocol/bench-config.ts'
import type { Picture } from '#app/protocol/messages.ts'
import { useLink, usePicture } from '#app/telemetry/telemetry.tsx'
import { type TubeGeometry, tubeGeometry } from './tube-geometry.ts'
import { TubeScale, TubeScene } from './tube-scene.tsx'

type Props = {
  config: CommissionedBench
  /** The beam, where the bench has a picture of it. */
  picture: Picture | null
  /** Edges that this person entered last, metres along the scale. */
  edges: number[]
}

type Sight = { x: number; y: number }

/** The tube before its scale as the bridge shows it, while it does. */
export function LiveTube({ benchId, ...props }: Omit<Props, 'picture'> & { benchId: string }) {
  const received = usePicture(benchId)
  const isLive = useLink().kind === 'connected'
  return <Tube {...props} picture={isLive && props.config.picturePath !== null ? received : null} />
}

/**
 * The tube before its scale. Where the beam is in the picture, a sight line and an enlargement help to read its edges; the
 * reading stays the reader's.
 */
export function Tube({ config, picture, edges }: Props) {
  const geometry = useMemo(() => tubeGeometry(config), [config])
  const [sight, setSight] = useState<Sight | null>(null)
  const [isSighting, setSighting] = useState(false)
  const blurId = useId()
  const { box } = geometry
  const isSeen = picture !== null && picture.points.length > 1
  const marks = edges.map((metres) => geometry.scale.zero + metres * 1000)

  function follow(event: React.PointerEvent<SVGSVGElement>) {
    setSight(toMillimetres(event, geometry))
    setSighting(true)
  }

  return (
    <figure className="grid gap-2">
      <div className="rounded-md border border-rule bg-glass">
        <svg
          viewBox={`${box.left} ${box.top} ${box.width} ${box.height}`}
          className="block w-full touch-pan-y"
          role="img"
          aria-label={tubeWords(config, isSeen)}
          onPointerMove={follow}
          onPointerDown={follow}
          onPointerLeave={() => setSighting(false)}
        >
          <defs>
            <filter id={blurId} x="-50%" y="-50%" width="200%" height="200%">
              <feGaussianBlur stdDeviation="2.2" />
            </filter>
          </defs>
          <TubeScene geometry={geometry} picture={picture} blurId={blurId} />
          <TubeScale geometry={geometry} edges={marks} />
          {sight && isSighting && (
            <path
              d={`M${sight.x} ${box.top}V${box.top + box.height}`}
              className="stroke-ink-soft"
              strokeWidth="0.25"
              strokeDasharray="1.5 1.5"
            />
          )}
        </svg>
      </div>
      {config.picturePath !== null && (
        <Enlargement
          geometry={geometry}
          picture={picture}
          edges={marks}
          sight={sight}
          setSight={setSight}
          setSighting={setSighting}
        />
      )}
    </figure>
  )
}

function toMillimetres(event: React.PointerEvent<SVGSVGElement>, { box }: TubeGeometry): Sight {
  const drawn = event.currentTarget.getBoundingClientRect()
  return {
    x: box.left + ((event.clientX - drawn.left) / drawn.width) * box.width,
    y: -(box.top + ((event.clientY - drawn.top) / drawn.height) * box.height),
  }
}

function scaleWords({ scale }: CommissionedBench): string {
  if (scale.kind === 'rungs') return `rungs: ${scale.rungs.map(({ name }) => name).join(', ')}`
  return `a scale of ${Math.round(scale.lengthMetres * 100)} cm, a mark each ${scale.graduationMetres * 1000} mm`
}

function tubeWords(config: CommissionedBench, isSeen: boolean): string {
  const scale = scaleWords(config)
  if (config.picturePath === null) return `The scale of this bench: ${scale}. The beam is in the tube itself.`
  return `The tube with ${scale}. ${isSeen ? 'The beam is visible.' : 'No beam is visible.'}`
}

type EnlargementProps = {
  geometry: TubeGeometry
  picture: Picture | null
  edges: number[]
  sight: Sight | null
  setSight: (sight: Sight) => void
  setSighting: (isSighting: boolean) => void
}

const halfWidth = 7

/** Beam and scale on either side of the sight line, enlarged alike. Moved by pointer over the tube, or by its slider. */
function Enlargement(props: EnlargementProps) {
  const { geometry, picture, edges, sight, setSight, setSighting } = props
  const id = useId()
  const { scale } = geometry
  const x = sight?.x ?? scale.zero + scale.length / 2
  const y = sight?.y ?? geometry.gun.y
  return (
    <div className="grid gap-1">
      <svg
        viewBox="0 0 140 32"
        className="block w-full rounded-md border border-rule bg-glass"
        role="img"
        aria-label="Enlargement at the sight line"
      >
        <svg
          aria-hidden="true"
          x="0"
          y="0"
          width="140"
          height="16"
          viewBox={`${x - halfWidth} ${-y - 0.8} ${2 * halfWidth} 1.6`}
        >
          <TubeScene geometry={geometry} picture={picture} blurId={null} />
        </svg>
        <svg
          aria-hidden="true"
          x="0"
          y="16"
          width="140"
          height="16"
          viewBox={`${x - halfWidth} ${-scale.y - 0.8} ${2 * halfWidth} 1.6`}
        >
          <EnlargedScale geometry={geometry} edges={edges} />
        </svg>
        <path d="M70 0V32" className="stroke-ink" strokeWidth="0.4" />
      </svg>
      <div className="flex items-center gap-3 text-[12.5px] text-ink-soft">
        <label htmlFor={id}>sight line</label>
        <input
          id={id}
          type="range"
          min={geometry.box.left}
          max={geometry.box.left + geometry.box.width}
          step="0.1"
          value={x}
          onChange={(event) => setSight({ x: Number(event.target.value), y })}
          onFocus={() => setSighting(true)}
          onBlur={() => setSighting(false)}
          aria-valuetext={`${((x - scale.zero) / 10).toFixed(1)} centimetres on the scale`}
          className="min-w-0 flex-1 touch:h-12"
        />
      </div>
    </div>
  )
}

/** The same marks in the same places, drawn to fit the low strip. */
function EnlargedScale({ geometry, edges }: { geometry: TubeGeometry; edges: number[] }) {
  const { y, zero, length, marks } = geometry.scale
  return (
    <g className="fill-ink-soft stroke-ink-soft" strokeWidth="0.06">
      <path
        d={`M${zero} ${-y - 0.7}h${length}${marks.map((mark) => `M${mark.x} ${-y - 0.7}v${mark.length / 7}`).join('')}`}
        fill="none"
      />
      {marks.map(
        (mark) =>
          mark.label && (
            <text key={mark.x} x={mark.x + 0.12} y={-y + 0.68} fontSize="0.62" stroke="none">
              {mark.label}
            </text>
          ),
      )}
      {edges.map((edge) => (
        <path key={edge} d={`M${edge} ${-y - 0.7}l-0.12 -0.1h0.24z`} className="fill-ink" stroke="none" />
      ))}
    </g>
  )
}
