import { PNG } from 'pngjs'

type Column = { centre: number; width: number }

/**
 * Reads a beam's two outer edges off a picture of the tube, as an eye does: the columns of the beam against the columns
 * of the scale's marks. Knows nothing of the page but its colours: a blue-green beam, a reddish scale, in a dark room.
 * @param numbers the first and the last number printed at the scale's long marks, in cm
 * @returns the positions of the edges on the scale, in cm
 */
export function readEdges(
  png: Buffer,
  numbers: { first: number; last: number },
): { left: number; right: number } {
  const picture = PNG.sync.read(png)
  const beam = beamColumns(picture)
  const marks = longMarks(picture, numbers.last - numbers.first)
  const [first, last] = [marks[0], marks.at(-1)]
  if (!first || !last) throw new Error('The picture shows no scale')
  const perCentimetre = (last.centre - first.centre) / (numbers.last - numbers.first)
  const onScale = (column: number) => numbers.first + (column - first.centre) / perCentimetre
  return { left: onScale(beam.left), right: onScale(beam.right) }
}

function pixel({ width, data }: PNG, x: number, y: number) {
  const at = 4 * (y * width + x)
  return { red: data[at] ?? 0, green: data[at + 1] ?? 0, blue: data[at + 2] ?? 0 }
}

/** How blue-green a pixel is: nothing but the beam is. */
function glow(picture: PNG, x: number, y: number): number {
  const { red, green, blue } = pixel(picture, x, y)
  return Math.max(0, Math.min(green, blue) - red)
}

/** The outer edges of the beam, where its brightness has fallen to half of the beam's own, to a part of a pixel. */
function beamColumns(picture: PNG): { left: number; right: number } {
  const brightest = Array.from({ length: picture.width }, (_, x) => {
    let most = 0
    for (let y = 0; y < picture.height; y++) most = Math.max(most, glow(picture, x, y))
    return most
  })
  const peak = Math.max(...brightest)
  if (peak < 60) throw new Error('The picture shows no beam')
  // The soft halo round the beam stays well below this; the beam's own edge is where it is crossed.
  const edge = 0.7 * peak
  const leftColumn = brightest.findIndex((value) => value >= edge)
  const rightColumn = brightest.findLastIndex((value) => value >= edge)
  const part = (inside: number, outside: number) => {
    const [a, b] = [brightest[inside] ?? 0, brightest[outside] ?? 0]
    return a === b ? 0.5 : Math.min(1, (a - edge) / (a - b))
  }
  return {
    left: leftColumn + 0.5 - part(leftColumn, leftColumn - 1),
    right: rightColumn + 0.5 + part(rightColumn, rightColumn + 1),
  }
}

/** The long marks of the scale: the row in the lower part of the picture that shows just as many of them, evenly spaced. */
function longMarks(picture: PNG, intervals: number): Column[] {
  for (let y = picture.height - 1; y > picture.height / 2; y--) {
    const marks = inkRuns(picture, y)
    if (marks.length === intervals + 1 && isEven(marks)) return marks
  }
  throw new Error('The picture shows no scale')
}

function inkRuns(picture: PNG, y: number): Column[] {
  const runs: Column[] = []
  let start: number | null = null
  for (let x = 0; x <= picture.width; x++) {
    const { red, green, blue } = x < picture.width ? pixel(picture, x, y) : { red: 0, green: 0, blue: 0 }
    const isInk = red > 70 && red >= green && red >= blue
    if (isInk && start === null) start = x
    if (!isInk && start !== null) {
      runs.push({ centre: (start + x) / 2, width: x - start })
      start = null
    }
  }
  return runs
}

function isEven(marks: Column[]): boolean {
  const steps = marks.slice(1).map((mark, index) => mark.centre - (marks[index]?.centre ?? 0))
  const [least, most] = [Math.min(...steps), Math.max(...steps)]
  return least > 10 && most - least <= 2 && marks.every(({ width }) => width < least / 3)
}
