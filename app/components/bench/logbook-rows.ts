import type { ReadingView } from '#app/benches/bench-view.server.ts'

/** The newest reading that is not struck, whose edges are to be read while the beam still stands. */
export function readingToRead(readings: ReadingView[]): ReadingView | null {
  return newestFirst(readings).find((reading) => !reading.struck) ?? null
}

/** The newest reading that is not struck and of which someone read the diameter: what a live e/m can rest on. */
export function readingWithDiameter(readings: ReadingView[]): ReadingView | null {
  return newestFirst(readings).find((reading) => !reading.struck && isRead(reading)) ?? null
}

const isRead = ({ edges, photos, rung }: ReadingView) => rung !== null || edges.length + photos.length > 0

/** Whether this person has read the beam of a reading, at its edges or off a photo. A rung is the beam's, whoever noted it. */
export const isReadBy = ({ edges, photos, rung }: ReadingView, personId: string) =>
  rung !== null || [...edges, ...photos].some((read) => read.personId === personId)

export const oldestFirst = (readings: ReadingView[]) => readings.toSorted((a, b) => a.number - b.number)
const newestFirst = (readings: ReadingView[]) => readings.toSorted((a, b) => b.number - a.number)

type Edges = ReadingView['edges'][number]
type PhotoRead = ReadingView['photos'][number]

/** What one person read, and what others did, with how far apart the diameters on the scale lie. */
export function edgesOf(
  reading: ReadingView,
  personId: string,
): {
  mine: Edges | null
  myPhoto: PhotoRead | null
  others: (Edges | PhotoRead)[]
  spreadMetres: number | null
} {
  const all = [...reading.edges, ...reading.photos]
  const diameters = all.map((read) =>
    'diameterMetres' in read ? read.diameterMetres : read.rightMetres - read.leftMetres,
  )
  return {
    mine: reading.edges.find((edges) => edges.personId === personId) ?? null,
    myPhoto: reading.photos.find((photo) => photo.personId === personId) ?? null,
    others: all.filter((read) => read.personId !== personId),
    spreadMetres: diameters.length > 1 ? Math.max(...diameters) - Math.min(...diameters) : null,
  }
}
