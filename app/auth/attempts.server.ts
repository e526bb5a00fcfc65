import { RateLimiterMemory, RateLimiterRes } from 'rate-limiter-flexible'

/** Five wrong passwords, then a wait. Counted per account and never per address: a whole class shares one. */
const attempts = new RateLimiterMemory({ points: 5, duration: 300, blockDuration: 300 })

/** Counts an attempt before it is judged, so that attempts side by side count as well. A sentence when there were too many. */
export async function countAttempt(key: string): Promise<string | null> {
  try {
    await attempts.consume(key)
    return null
  } catch (limit) {
    if (!(limit instanceof RateLimiterRes)) throw limit
    const minutes = Math.max(1, Math.ceil(limit.msBeforeNext / 60_000))
    return `Too many attempts for this account. Wait ${minutes} minute${minutes === 1 ? '' : 's'}, then try again.`
  }
}

/** After the right password. */
export const forgetAttempts = (key: string) => attempts.delete(key)
