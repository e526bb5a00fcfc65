/** Takes what every measured function returns, so that no call can be left out as unused. */
let sink = 0

const BLOCKS = 15
const BLOCK_SECONDS = 0.02
const WARM_UP_SECONDS = 0.5

type Work = (call: number) => number

function secondsFor(work: Work, calls: number): number {
  const start = performance.now()
  for (let call = 0; call < calls; call++) sink += work(call)
  return (performance.now() - start) / 1000
}

function median(values: number[]): number {
  const sorted = [...values].sort((a, b) => a - b)
  return sorted[sorted.length >> 1] as number
}

/** As many calls as fill a block, after the warm-up; one where a call is longer than that. */
function callsOfBlock(work: Work): number {
  let calls = 1
  let spent = 0
  let last = 0
  while (spent < WARM_UP_SECONDS) {
    last = secondsFor(work, calls)
    spent += last
    if (last < BLOCK_SECONDS) calls *= 2
  }
  return Math.max(1, Math.round((calls * BLOCK_SECONDS) / Math.max(last, BLOCK_SECONDS)))
}

/**
 * Median time of one call of each, in seconds. Their blocks take turns, so that what else the machine does at that
 * time burdens all alike.
 *
 * @param works are given the number of the call, to vary their input with, and return a number that depends on all
 *   of their work
 */
export function measure(...works: Work[]): number[] {
  const calls = works.map(callsOfBlock)
  const times = works.map((): number[] => [])
  for (let block = 0; block < BLOCKS; block++) {
    works.forEach((work, i) => {
      times[i]?.push(secondsFor(work, calls[i] as number) / (calls[i] as number))
    })
  }
  if (!Number.isFinite(sink)) throw new Error('a measured function returned no number')
  return times.map(median)
}

export type Figure = {
  name: string
  seconds: number
  /** none where the figure is the ratio */
  goalSeconds?: number
  /** time of the library's way over our own, and how much it ought to be at least */
  library?: { name: string; ratio: number; atLeast?: number }
}

export function isShort({ seconds, goalSeconds, library }: Figure): boolean {
  return (
    seconds > (goalSeconds ?? Number.POSITIVE_INFINITY) || (library?.ratio ?? 0) < (library?.atLeast ?? 0)
  )
}

function duration(seconds: number): string {
  const [factor, unit] =
    seconds < 1e-3 ? ([1e6, 'µs'] as const) : seconds < 1 ? ([1e3, 'ms'] as const) : ([1, 's'] as const)
  return `${(seconds * factor).toPrecision(3)} ${unit}`
}

/** One line: name, measured ÷ goal, ratio to the library, ok or short. */
export function lineOf(figure: Figure): string {
  const { name, seconds, goalSeconds, library } = figure
  const goal =
    goalSeconds === undefined
      ? duration(seconds)
      : `${duration(seconds)} ÷ ${duration(goalSeconds)} = ${(seconds / goalSeconds).toFixed(3)}`
  const least = library?.atLeast === undefined ? '' : ` (at least ${library.atLeast})`
  const ratio = library ? `${library.ratio.toPrecision(3)} times as fast as ${library.name}${least}` : '–'
  return [name.padEnd(52), goal.padEnd(30), ratio.padEnd(76), isShort(figure) ? 'short' : 'ok'].join('  ')
}

/** Speed is compared at the same accuracy only. */
export function requireAgreement(name: string, ours: number, theirs: number, relative: number): void {
  if (!(Math.abs(ours - theirs) <= relative * Math.abs(ours))) {
    throw new Error(`${name}: ${ours} and ${theirs} differ by more than ${relative}`)
  }
}
