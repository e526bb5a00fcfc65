import type { CommissionedBench, RulerScale } from '#app/protocol/bench-config.ts'

/** All in millimetres, x to the right and y up, as seen against the scale. */
export type TubeGeometry = {
  bulbRadius: number
  gun: { x: number; y: number }
  scale: { y: number; zero: number; length: number; marks: ScaleMark[] }
  box: { left: number; top: number; width: number; height: number }
}
export type ScaleMark = { x: number; length: number; label: string | null }

const margin = 7
const labelRoom = 15
const rungLength = 5

type Drawn = Pick<CommissionedBench, 'scale' | 'tube' | 'gun'>

/**
 * Where things stand in the picture. The beam's points already arrive as seen against the scale; bulb and gun stand
 * before a scale that lies behind them, and so look larger on it by L/(L − δ). Rungs stand beside the gun, where the
 * beam meets them.
 */
export function tubeGeometry(config: Drawn): TubeGeometry {
  const { scale, tube, gun } = config
  const enlargement =
    scale.kind === 'rungs'
      ? 1
      : scale.eyeDistanceMetres / (scale.eyeDistanceMetres - scale.distanceBehindMetres)
  const bulbRadius = tube.bulbRadiusMetres * enlargement * 1000
  const marks = scaleMarks(config)
  const ends = scale.kind === 'rungs' ? [gun.xMetres * 1000, ...marks.map(({ x }) => x)] : rulerEnds(scale)
  const zero = Math.min(...ends)
  const length = Math.max(...ends) - zero
  const left = Math.min(-bulbRadius, zero) - margin
  const right = Math.max(bulbRadius, zero + length) + margin
  const foot = -(bulbRadius + 3)
  const top = bulbRadius + margin
  return {
    bulbRadius,
    gun: { x: gun.xMetres * enlargement * 1000, y: gun.yMetres * enlargement * 1000 },
    scale: { y: scale.kind === 'rungs' ? gun.yMetres * 1000 + rungLength / 2 : foot, zero, length, marks },
    box: { left, top: -top, width: right - left, height: top - foot + labelRoom },
  }
}

function rulerEnds({ zeroMetres, lengthMetres }: RulerScale): number[] {
  return [zeroMetres * 1000, (zeroMetres + lengthMetres) * 1000]
}

/**
 * A mark at every graduation, longer at each fifth, longest and labelled in centimetres at each whole centimetre; or one
 * at every rung, with its name.
 */
export function scaleMarks({ scale, gun }: Drawn): ScaleMark[] {
  if (scale.kind === 'rungs') {
    // With a positive current the electrons circle counter-clockwise: a gun that points up sends them to the left.
    const side = gun.direction.y < 0 ? 1 : -1
    return scale.rungs.map(({ name, distanceMetres }) => ({
      x: (gun.xMetres + side * distanceMetres) * 1000,
      length: rungLength,
      label: name,
    }))
  }
  const graduation = scale.graduationMetres * 1000
  const count = Math.floor((scale.lengthMetres * 1000) / graduation + 1e-6)
  return Array.from({ length: count + 1 }, (_, i) => {
    const along = i * graduation
    const isWhole = (multiple: number) => Math.abs(along / multiple - Math.round(along / multiple)) < 1e-6
    const x = scale.zeroMetres * 1000 + along
    if (isWhole(10)) return { x, length: 5, label: String(Math.round(along / 10)) }
    return { x, length: isWhole(5) ? 3.6 : 2.2, label: null }
  })
}

/** The path of an SVG through points in millimetres; y points up on the bench and down in an SVG. */
export function pathOf(points: readonly (readonly [number, number])[]): string {
  return points.map(([x, y], i) => `${i ? 'L' : 'M'}${x} ${-y}`).join('')
}
