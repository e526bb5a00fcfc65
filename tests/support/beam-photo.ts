import sharp from 'sharp'

/** A photo of a beam before its scale, as a camera that was held a little askew takes it, with what stands where in its pixels. */
export type BeamPhoto = {
  bytes: Buffer
  width: number
  height: number
  /** A point of the beam's outer edge, by its angle at the circle's centre. */
  edgeAt: (degrees: number) => { x: number; y: number }
  /** The foot of a line of the scale. */
  lineAt: (centimetres: number) => { x: number; y: number }
}

const width = 1600
const height = 1400
const pixelsPerCentimetre = 110
const centre = { x: 800, y: 640 }
const scaleTop = 1210

/** Draws a beam whose outer edges are so far apart, and a scale of 12 cm with a line each millimetre below it. */
export async function drawBeamPhoto(diameterCentimetres: number, askewDegrees = 2): Promise<BeamPhoto> {
  const radius = (diameterCentimetres / 2) * pixelsPerCentimetre
  const zero = centre.x - 6 * pixelsPerCentimetre
  const beamWidth = 14
  const lines = Array.from({ length: 121 }, (_, i) => {
    const length = i % 10 === 0 ? 60 : i % 5 === 0 ? 42 : 28
    return `M${zero + (i * pixelsPerCentimetre) / 10} ${scaleTop}v${length}`
  })
  const numbers = Array.from(
    { length: 13 },
    (_, cm) => `<text x="${zero + cm * pixelsPerCentimetre}" y="${scaleTop + 105}">${cm}</text>`,
  )
  const svg = `<svg xmlns="http://www.w3.org/2000/svg" width="${width}" height="${height}">
    <rect width="100%" height="100%" fill="#0b0a08"/>
    <g transform="rotate(${askewDegrees} ${centre.x} ${centre.y})">
      <circle cx="${centre.x}" cy="${centre.y}" r="${radius - beamWidth / 2}" fill="none" stroke="#7fe6e0" stroke-width="${beamWidth}"/>
      <rect x="${zero - 40}" y="${scaleTop - 12}" width="${12 * pixelsPerCentimetre + 80}" height="130" fill="#b9ae96"/>
      <path d="${lines.join('')}" stroke="#1c1712" stroke-width="4"/>
      <g font-family="monospace" font-size="34" text-anchor="middle" fill="#1c1712">${numbers.join('')}</g>
    </g></svg>`
  const turn = (askewDegrees * Math.PI) / 180
  const turned = (x: number, y: number) => ({
    x: centre.x + x * Math.cos(turn) - y * Math.sin(turn),
    y: centre.y + x * Math.sin(turn) + y * Math.cos(turn),
  })
  return {
    bytes: await sharp(Buffer.from(svg)).jpeg({ quality: 92 }).toBuffer(),
    width,
    height,
    edgeAt: (degrees) => {
      const angle = (degrees * Math.PI) / 180
      return turned(radius * Math.cos(angle), radius * Math.sin(angle))
    },
    lineAt: (centimetres) => turned((centimetres - 6) * pixelsPerCentimetre, scaleTop - centre.y),
  }
}
