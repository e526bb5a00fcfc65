import type { ReadingView } from '#app/benches/bench-view.server.ts'

/** The newest reading that is not struck, whose edges are to be read while the beam still stands. */
export function readingToRead(readings: ReadingView[]): ReadingView | null {
  return newestFirst(readings).find((reading) => !reading.struck) ?? null
}

/** The newest reading that is not struck and has edges: what a live e/m can rest on. */
export function readingWithEdges(readings: ReadingView[]): ReadingView | null {
  return newestFirst(readings).find((reading) => !reading.struck && reading.edges.length > 0) ?? null
}

export const oldestFirst = (readings: ReadingView[]) => readings.toSorted((a, b) => a.number - b.number)
const newestFirst = (readings: ReadingView[]) => readings.toSorted((a, b) => b.number - a.number)

type Edges = ReadingView['edges'][number]

/** Edges of one person, and of the others with how far apart the diameters lie. */
export function edgesOf(
  reading: ReadingView,
  personId: string,
): { mine: Edges | null; others: Edges[]; spreadMetres: number | null } {
  const diameters = reading.edges.map(({ leftMetres, rightMetres }) => rightMetres - leftMetres)
  return {
    mine: reading.edges.find((edges) => edges.personId === personId) ?? null,
    others: reading.edges.filter((edges) => edges.personId !== personId),
    spreadMetres: diameters.length > 1 ? Math.max(...diameters) - Math.min(...diameters) : null,
  }
}
