import type { PhotoMeasurement } from '#app/analysis/photo-measurement.ts'
import { type Marks, ofKind } from './marks.ts'

type Props = { marks: Marks; measurement: PhotoMeasurement; beam: string }

/** Residuals are drawn this much longer than they are, or they would not be seen. */
export const residualsDrawn = 20

/** The circle that fits the points best, and by how much each point lies off it. */
export function FittedCircle({ marks, measurement, beam }: Props) {
  const { centreX, centreY, radius } = measurement.circle
  const longest = radius / 2
  const offs = ofKind(marks, 'point').map(({ x, y }, index) => {
    const off = (measurement.residualsMetres[index] ?? 0) * measurement.scale.pixelsPerMetre
    const length = Math.max(-longest, Math.min(longest, off * residualsDrawn))
    const angle = Math.atan2(y - centreY, x - centreX)
    const at = (r: number) => `${centreX + r * Math.cos(angle)} ${centreY + r * Math.sin(angle)}`
    return `M${at(radius)}L${at(radius + length)}`
  })
  const cross = radius / 30
  const middle = `M${centreX - cross} ${centreY}h${2 * cross}M${centreX} ${centreY - cross}v${2 * cross}`
  const lines = `${offs.join('')}${middle}`
  return (
    <g fill="none" className={beam}>
      {(['seam', 'line'] as const).map((part) => (
        <g
          key={part}
          className={part === 'seam' ? 'stroke-ground opacity-60' : 'stroke-current'}
          strokeWidth={part === 'seam' ? 3.5 : 1.5}
        >
          <circle cx={centreX} cy={centreY} r={radius} vectorEffect="non-scaling-stroke" />
          <path d={lines} vectorEffect="non-scaling-stroke" />
        </g>
      ))}
    </g>
  )
}
