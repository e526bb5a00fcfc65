import ReconnectingWebSocket from 'partysocket/ws'
import { protocolVersion } from '#app/protocol/messages.ts'
import type { TelemetryStore } from './store.ts'

const presenceMilliseconds = 2000
/** The bridge tells the state of its benches more often than this: longer silence is a dead line. */
const silenceMilliseconds = 6000
/** The bridge closes with this when the web application has revoked the person's keys. */
const revokedCode = 4001

type Options = {
  store: TelemetryStore
  socketUrl: string
  /** The bench whose page this is: presence is shown there. Null on a page of several benches. */
  benchId: string | null
}

/** Opens the telemetry and keeps it open. Nothing is ever queued while it is closed: a stale command must not be replayed. */
export function openConnection({ store, socketUrl, benchId }: Options): {
  send: (message: object) => boolean
  /** A press of 'I am here'. */
  showPresence: () => void
  close: () => void
} {
  let isResumeDoubtful = false
  let hadInput = false
  let heardAt = Date.now()
  let isEnded = false

  const socket = new ReconnectingWebSocket(nextUrl, null, {
    maxEnqueuedMessages: 0,
    minReconnectionDelay: 400,
    maxReconnectionDelay: 4000,
    reconnectionDelayGrowFactor: 1.5,
    connectionTimeout: 4000,
  })

  async function nextUrl(): Promise<string> {
    const url = new URL(socketUrl)
    // A key that has just failed may have been revoked; then a fresh ticket tells whether the person may still watch.
    if (store.resumeKey && !isResumeDoubtful) {
      isResumeDoubtful = true
      url.searchParams.set('resume', store.resumeKey)
      return url.href
    }
    isResumeDoubtful = false
    url.searchParams.set('ticket', await askTicket())
    return url.href
  }

  async function askTicket(): Promise<string> {
    const body = new FormData()
    if (benchId) body.set('benchId', benchId)
    const response = await fetch('/api/tickets', { method: 'POST', body })
    if (response.redirected || response.status === 401) return refuse('The session has ended. Sign in again.')
    if (response.status === 403 || response.status === 404)
      return refuse('You may not watch this bench any longer.')
    const reply: unknown = await response.json()
    if (typeof reply === 'object' && reply !== null && 'ticket' in reply && typeof reply.ticket === 'string')
      return reply.ticket
    throw new Error('The web application gave no ticket.')
  }

  function refuse(reason: string): never {
    isEnded = true
    store.setLink({ kind: 'refused', reason })
    socket.close()
    throw new Error(reason)
  }

  function send(message: object): boolean {
    if (socket.readyState !== socket.OPEN) return false
    return socket.send(JSON.stringify({ version: protocolVersion, ...message }))
  }

  function present(): void {
    if (!benchId) return
    if (send({ type: 'present', benchId, input: hadInput })) hadInput = false
  }

  socket.addEventListener('open', () => {
    heardAt = Date.now()
  })
  socket.addEventListener('message', (event: MessageEvent) => {
    heardAt = Date.now()
    if (typeof event.data !== 'string') return
    const read = store.receive(event.data)
    if (read.ok && read.message.type === 'hello') {
      isResumeDoubtful = false
      present()
    }
    if (!read.ok && read.reason.startsWith('Protocol version')) {
      isEnded = true
      store.setLink({ kind: 'refused', reason: read.reason })
      socket.close()
    }
  })
  socket.addEventListener('close', (event) => {
    if (event.code === revokedCode) {
      isEnded = true
      store.setLink({ kind: 'refused', reason: 'You have been signed out: sign in again.' })
      socket.close()
    }
    if (!isEnded) store.setLink({ kind: 'reconnecting', since: Date.now() / 1000, reason: null })
  })

  const noteInput = () => {
    hadInput = true
  }
  const inputs = ['pointerdown', 'pointermove', 'keydown', 'wheel'] as const
  for (const name of inputs) window.addEventListener(name, noteInput, { capture: true, passive: true })
  const timer = setInterval(() => {
    present()
    if (socket.readyState === socket.OPEN && Date.now() - heardAt > silenceMilliseconds) {
      heardAt = Date.now()
      store.setLink({
        kind: 'reconnecting',
        since: Date.now() / 1000 - silenceMilliseconds / 1000,
        reason: null,
      })
      socket.reconnect()
    }
  }, presenceMilliseconds)

  return {
    send,
    showPresence() {
      hadInput = true
      present()
    },
    close() {
      isEnded = true
      clearInterval(timer)
      for (const name of inputs) window.removeEventListener(name, noteInput, { capture: true })
      socket.close()
    },
  }
}
