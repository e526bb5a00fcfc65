import * as z from 'zod'
import { measurePhoto, type PhotoMeasurement } from '#app/analysis/photo-measurement.ts'
import { numberField } from '../benches/number-field.ts'

/** Far more than anyone marks, and together less than a form may hold. */
const mostScaleMarks = 40
const mostPoints = 300

/** As the page holds them: what stands on the scale is text, as it was typed. */
export type TypedMarks = {
  scaleMarks: { x: number; y: number; centimetres: string }[]
  points: { x: number; y: number }[]
}

type Photo = { width: number; height: number }
type Scale = { lengthMetres: number; graduationMetres: number }

/** A tenth of a micrometre, as for edges. */
const metres = (centimetres: number) => Math.round(centimetres * 1e5) / 1e7

/** The field in which both kinds of marks are sent, as JSON. */
const marksSchema = z.object({
  scaleMarks: z
    .array(z.object({ x: z.number(), y: z.number(), centimetres: z.string().max(30) }))
    .max(mostScaleMarks),
  points: z.array(z.object({ x: z.number(), y: z.number() })).max(mostPoints),
})

/** What a form brought, or null where it is not what the page sends. */
export function readMarks(form: FormData): TypedMarks | null {
  const sent = form.get('marks')
  if (typeof sent !== 'string') return null
  try {
    return marksSchema.parse(JSON.parse(sent))
  } catch (error) {
    if (error instanceof SyntaxError || error instanceof z.ZodError) return null
    throw error
  }
}

/** The number beside a scale mark, in metres, or what is wrong with it. */
export function readScaleNumber(
  typed: string,
  scale: Scale,
): { metres: number; error: null } | { metres: null; error: string } {
  const longest = +(scale.lengthMetres * 100).toFixed(5)
  const parsed = numberField('what this mark reads', 'centimetres')
    .refine((read) => read >= 0 && read <= longest, { error: `The scale goes from 0 to ${longest} cm.` })
    .safeParse(typed)
  if (parsed.success) return { metres: metres(parsed.data), error: null }
  return { metres: null, error: parsed.error.issues[0]?.message ?? '' }
}

export type Measured = {
  scaleMarks: { x: number; y: number; scaleMetres: number }[]
  points: { x: number; y: number }[]
  measurement: PhotoMeasurement
}

/**
 * The diameter that marks on a photo give, or what is still wanting or wrong, in one sentence that says what to do. The
 * page asks it at each mark, the server once more when they are saved.
 */
export function measureMarks(
  typed: TypedMarks,
  { photo, scale }: { photo: Photo; scale: Scale },
): { measured: Measured; sentence: null } | { measured: null; sentence: string } {
  const none = (sentence: string) => ({ measured: null, sentence })
  const { points } = typed
  const scaleMarks = typed.scaleMarks.flatMap(({ x, y, centimetres }) => {
    const { metres } = readScaleNumber(centimetres, scale)
    return metres === null ? [] : [{ x, y, scaleMetres: metres }]
  })
  const isOutside = ({ x, y }: { x: number; y: number }) =>
    !(x >= 0 && x <= photo.width && y >= 0 && y <= photo.height)
  if ([...typed.scaleMarks, ...points].some(isOutside)) return none('A mark lies outside the photo.')
  if (typed.scaleMarks.length < 2)
    return none('Mark two lines of the scale or more, far apart, and type what each reads.')
  if (scaleMarks.length < typed.scaleMarks.length) return none('Type what each scale mark reads, in cm.')
  const [first, ...others] = scaleMarks
  if (others.every(({ scaleMetres }) => scaleMetres === first?.scaleMetres))
    return none('All scale marks read the same. Mark two lines of the scale that lie far apart.')
  if (isOneSpot(scaleMarks)) return none('The scale marks lie on one another. Set each on its own line.')
  if (points.length < 3)
    return none(`Mark three points of the beam or more, all around it: ${points.length} so far.`)
  try {
    const measurement = measurePhoto({ scaleMarks, points, graduationMetres: scale.graduationMetres })
    return { measured: { scaleMarks, points, measurement }, sentence: null }
  } catch (error) {
    if (!(error instanceof RangeError)) throw error
    // What else `measurePhoto` refuses is answered above.
    return none(
      error.message.startsWith('scaleMarks')
        ? 'The scale marks contradict each other. Look whether each has its own number.'
        : 'These points lie nearly on a line, and give no circle. Mark points all around the beam.',
    )
  }
}

function isOneSpot(marks: { x: number; y: number }[]): boolean {
  return marks.every(({ x, y }) => x === marks[0]?.x && y === marks[0]?.y)
}

/** What makes a measurement doubtful, in sentences. It can be saved all the same: its uncertainty has most of it. */
export function doubts({ measurement, scaleMarks }: Measured, scale: Scale): string[] {
  const sentences: string[] = []
  if (measurement.isShortArc)
    sentences.push(
      `The points cover only ${Math.round(measurement.arcDegrees)}° of the circle. Mark points all around it: the diameter becomes far more certain.`,
    )
  if (measurement.ellipseMetres !== null)
    sentences.push(
      `The points lie on an ellipse, whose diameters differ by ${(measurement.ellipseMetres * 1000).toFixed(1)} mm: the camera looked from aside. Take the photo straight from the front.`,
    )
  const { residualsMetres } = measurement.scale
  const worst = residualsMetres.indexOf(Math.max(...residualsMetres))
  const off = residualsMetres[worst] ?? 0
  if (off > scale.graduationMetres / 2)
    sentences.push(
      `The scale mark at ${+((scaleMarks[worst]?.scaleMetres ?? 0) * 100).toFixed(2)} cm stands ${(off * 1000).toFixed(1)} mm off where the others put it. Look whether each mark has its own number, and whether the camera looked straight at the scale.`,
    )
  return sentences
}
