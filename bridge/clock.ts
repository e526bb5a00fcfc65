/** Seconds of a clock that never steps back. */
export type Clock = { now(): number }

export const monotonicClock: Clock = { now: () => performance.now() / 1000 }

/** Resolves after so many seconds of real time. */
export const wait = (seconds: number): Promise<void> =>
  new Promise((resolve) => setTimeout(resolve, seconds * 1000))

/** The promise's value, or `late` when it has not come within so many seconds. Rejections pass. */
export async function within<T, L>(seconds: number, promise: Promise<T>, late: L): Promise<T | L> {
  let timer: NodeJS.Timeout | undefined
  const deadline = new Promise<L>((resolve) => {
    timer = setTimeout(() => resolve(late), seconds * 1000)
  })
  try {
    return await Promise.race([promise, deadline])
  } finally {
    clearTimeout(timer)
  }
}
