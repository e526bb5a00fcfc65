import type { TelemetryStore } from './store.ts'

/** The bridge answers a make safe within its second; after this the web application is asked as well. */
const answerMilliseconds = 1500

type Options = {
  store: TelemetryStore
  send: (message: object) => boolean
  benchId: string | null
  /** Resolves once the bridge reports a make safe of this bench or room. */
  answered: Promise<string>
}

/**
 * Asks for make safe over the socket and, when that is closed or stays silent, through the web application.
 * Asking twice does no harm: a make safe is always accepted. Reports each step to the store.
 */
export async function requestMakeSafe({ store, send, benchId, answered }: Options): Promise<void> {
  if (send({ type: 'make-safe', benchId })) {
    store.setReport({ state: 'sent', sentence: 'Make safe sent to the bridge.' })
    const sentence = await Promise.race([answered, wait(answerMilliseconds)])
    if (sentence) return store.setReport({ state: 'answered', sentence })
  } else {
    store.setReport({
      state: 'sent',
      sentence: 'The link to the bridge is down: make safe sent through the web application.',
    })
  }
  store.setReport(await postMakeSafe(benchId))
}

async function postMakeSafe(benchId: string | null) {
  const failed = {
    state: 'failed' as const,
    sentence:
      'Make safe could not be delivered. Treat the bench as live and press its emergency stop. The supply takes its outputs down by itself when the bridge is gone.',
  }
  const body = new FormData()
  body.set('kind', 'make-safe')
  const path = benchId ? `/benches/${encodeURIComponent(benchId)}/commands` : '/make-safe'
  try {
    const response = await fetch(path, { method: 'POST', body, redirect: 'error' })
    const reply: unknown = await response.json()
    if (typeof reply !== 'object' || reply === null) return failed
    if ('answer' in reply && typeof reply.answer === 'string')
      return { state: 'answered' as const, sentence: reply.answer }
    if ('refusals' in reply && Array.isArray(reply.refusals)) {
      const [first] = reply.refusals as { sentence?: string }[]
      return first?.sentence
        ? { ...failed, sentence: `Make safe could not be delivered. ${first.sentence}` }
        : failed
    }
    return failed
  } catch {
    return failed
  }
}

function wait(milliseconds: number): Promise<null> {
  return new Promise((resolve) => setTimeout(() => resolve(null), milliseconds))
}
