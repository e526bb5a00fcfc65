import type { BenchConfig } from '#app/protocol/bench-config.ts'
import { configurationSchema, type SpoolBatch, spoolReplySchema } from '#app/protocol/commands.ts'
import type { Log } from './log.ts'
import { signedHeaders } from './signatures.ts'
import type { Spool } from './spool.ts'

const answerSeconds = 5
const quietSeconds = 1
const longestBackOffSeconds = 15
const batchLimits = { events: 200, summaries: 1000 }

type AppLinkOptions = {
  appUrl: string
  secret: string
  bridgeId: string
  spool: Spool
  log: Log
  wallNow: () => number
  onConfiguration: (benches: BenchConfig[]) => void
}

export type AppLink = {
  /** Something new is in the spool: send it soon. */
  nudge(): void
  close(): Promise<void>
}

/** The bridge's side of its talk with the app: fetches the configuration once, and sends the spool until confirmed. */
export function startAppLink(options: AppLinkOptions): AppLink {
  const stop = new AbortController()
  let wake: (() => void) | null = null
  let isNudged = false

  const pause = (seconds: number, canBeNudged: boolean): Promise<void> =>
    new Promise((resolve) => {
      const done = () => {
        clearTimeout(timer)
        stop.signal.removeEventListener('abort', done)
        if (wake === done) wake = null
        resolve()
      }
      const timer = setTimeout(done, seconds * 1000)
      stop.signal.addEventListener('abort', done, { once: true })
      if (canBeNudged) {
        wake = done
        if (isNudged) done()
        isNudged = false
      }
    })

  async function call(method: 'GET' | 'POST', path: string, body: string): Promise<unknown> {
    const url = new URL(path, options.appUrl)
    const signed = { method, path: url.pathname + url.search, body }
    const response = await fetch(url, {
      method,
      headers: {
        ...signedHeaders(options.secret, signed, options.wallNow()),
        ...(body === '' ? {} : { 'content-type': 'application/json' }),
      },
      ...(body === '' ? {} : { body }),
      signal: AbortSignal.any([stop.signal, AbortSignal.timeout(answerSeconds * 1000)]),
    })
    if (!response.ok) throw new Error(`${method} ${path} was answered ${response.status}`)
    return response.json()
  }

  async function sendOnce(): Promise<boolean> {
    const batch = await options.spool.batch(batchLimits)
    if (batch.events.length === 0 && batch.summaries.length === 0) return false
    const body: SpoolBatch = { bridgeId: options.bridgeId, ...batch }
    const reply = spoolReplySchema.parse(await call('POST', '/api/bridge/spool', JSON.stringify(body)))
    await options.spool.settle(reply)
    if (reply.continueAfter) options.log.warn(reply.continueAfter, 'The app has these numbers for others')
    const hasMoved =
      reply.confirmedEvent >= batch.oldest.event || reply.confirmedSummary >= batch.oldest.summary
    const isFull =
      batch.events.length === batchLimits.events || batch.summaries.length === batchLimits.summaries
    return isFull && hasMoved
  }

  /** Does the work until it says that it is done or the link is closed, with back-off while it fails. */
  async function repeat(what: string, work: () => Promise<number | null>): Promise<void> {
    let backOff = quietSeconds / 2
    while (!stop.signal.aborted) {
      try {
        const next = await work()
        if (next === null) return
        backOff = quietSeconds / 2
        if (next > 0) await pause(next, true)
      } catch (error) {
        if (stop.signal.aborted) return
        options.log.warn({ error: String(error) }, `${what} failed, and is tried again`)
        await pause(backOff, false)
        backOff = Math.min(backOff * 2, longestBackOffSeconds)
      }
    }
  }

  const running = Promise.all([
    repeat('Fetching the configuration', async () => {
      const { benches } = configurationSchema.parse(await call('GET', '/api/bridge/configuration', ''))
      options.onConfiguration(benches)
      return null
    }),
    repeat('Sending the spool', async () => ((await sendOnce()) ? 0 : quietSeconds)),
  ])

  return {
    nudge() {
      if (wake) wake()
      else isNudged = true
    },
    async close() {
      stop.abort()
      await running
    },
  }
}
